#include "textflag.h"

// The loops of vector.go, four lanes at a time. n is a positive multiple of 4. No product
// is fused with a sum.

// func addWide(to, a, b *float64, n int)
TEXT ·addWide(SB), NOSPLIT, $0-32
	MOVQ to+0(FP), DI
	MOVQ a+8(FP), SI
	MOVQ b+16(FP), DX
	MOVQ n+24(FP), CX
	SHLQ $3, CX
	XORQ AX, AX

addLoop:
	VMOVUPD (SI)(AX*1), Y0
	VADDPD (DX)(AX*1), Y0, Y0
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   addLoop
	VZEROUPPER
	RET

// func subWide(to, a, b *float64, n int)
TEXT ·subWide(SB), NOSPLIT, $0-32
	MOVQ to+0(FP), DI
	MOVQ a+8(FP), SI
	MOVQ b+16(FP), DX
	MOVQ n+24(FP), CX
	SHLQ $3, CX
	XORQ AX, AX

subLoop:
	VMOVUPD (SI)(AX*1), Y0
	VSUBPD (DX)(AX*1), Y0, Y0
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   subLoop
	VZEROUPPER
	RET

// func mulWide(to, a, b *float64, n int)
TEXT ·mulWide(SB), NOSPLIT, $0-32
	MOVQ to+0(FP), DI
	MOVQ a+8(FP), SI
	MOVQ b+16(FP), DX
	MOVQ n+24(FP), CX
	SHLQ $3, CX
	XORQ AX, AX

mulLoop:
	VMOVUPD (SI)(AX*1), Y0
	VMULPD (DX)(AX*1), Y0, Y0
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   mulLoop
	VZEROUPPER
	RET

// func divWide(to, a, b *float64, n int)
TEXT ·divWide(SB), NOSPLIT, $0-32
	MOVQ to+0(FP), DI
	MOVQ a+8(FP), SI
	MOVQ b+16(FP), DX
	MOVQ n+24(FP), CX
	SHLQ $3, CX
	XORQ AX, AX

divLoop:
	VMOVUPD (SI)(AX*1), Y0
	VDIVPD (DX)(AX*1), Y0, Y0
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   divLoop
	VZEROUPPER
	RET

// func sqrtWide(to, a *float64, n int)
TEXT ·sqrtWide(SB), NOSPLIT, $0-24
	MOVQ to+0(FP), DI
	MOVQ a+8(FP), SI
	MOVQ n+16(FP), CX
	SHLQ $3, CX
	XORQ AX, AX

sqrtLoop:
	VMOVUPD (SI)(AX*1), Y0
	VSQRTPD Y0, Y0
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   sqrtLoop
	VZEROUPPER
	RET

// func guardWide(to, a *float64, n int)
TEXT ·guardWide(SB), NOSPLIT, $0-24
	MOVQ to+0(FP), DI
	MOVQ a+8(FP), SI
	MOVQ n+16(FP), CX
	SHLQ $3, CX
	XORQ AX, AX
	VXORPD Y1, Y1, Y1

guardLoop:
	VMOVUPD (SI)(AX*1), Y0
	VCMPPD $0x19, Y1, Y0, Y2 // not ≥ 0
	VORPD Y2, Y0, Y0
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   guardLoop
	VZEROUPPER
	RET

// func cutWide(to, a *float64, n int)
TEXT ·cutWide(SB), NOSPLIT, $0-24
	MOVQ to+0(FP), DI
	MOVQ a+8(FP), SI
	MOVQ n+16(FP), CX
	SHLQ $3, CX
	XORQ AX, AX
	VXORPD Y1, Y1, Y1

cutLoop:
	VMOVUPD (SI)(AX*1), Y0
	VMAXPD Y0, Y1, Y0 // the number itself if it is none
	VADDPD Y1, Y0, Y0 // no −0
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   cutLoop
	VZEROUPPER
	RET

// func noiseWide(to, drift, variance, z *float64, n int, h float64)
TEXT ·noiseWide(SB), NOSPLIT, $0-48
	MOVQ to+0(FP), DI
	MOVQ drift+8(FP), SI
	MOVQ variance+16(FP), DX
	MOVQ z+24(FP), R8
	MOVQ n+32(FP), CX
	VBROADCASTSD h+40(FP), Y7
	SHLQ $3, CX
	XORQ AX, AX

noiseLoop:
	VMULPD (SI)(AX*1), Y7, Y0
	VMULPD (DX)(AX*1), Y7, Y1
	VSQRTPD Y1, Y1
	VMULPD (R8)(AX*1), Y1, Y1
	VADDPD Y1, Y0, Y0
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   noiseLoop
	VZEROUPPER
	RET

// func pairWide(to, up, down, z *float64, n int, h float64)
TEXT ·pairWide(SB), NOSPLIT, $0-48
	MOVQ to+0(FP), DI
	MOVQ up+8(FP), SI
	MOVQ down+16(FP), DX
	MOVQ z+24(FP), R8
	MOVQ n+32(FP), CX
	VBROADCASTSD h+40(FP), Y7
	SHLQ $3, CX
	XORQ AX, AX

pairLoop:
	VMOVUPD (SI)(AX*1), Y2
	VMOVUPD (DX)(AX*1), Y3
	VSUBPD Y3, Y2, Y0
	VADDPD Y3, Y2, Y1
	VMULPD Y7, Y0, Y0
	VMULPD Y7, Y1, Y1
	VSQRTPD Y1, Y1
	VMULPD (R8)(AX*1), Y1, Y1
	VADDPD Y1, Y0, Y0
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   pairLoop
	VZEROUPPER
	RET

// func moveWide(x, by *float64, n int, v float64)
TEXT ·moveWide(SB), NOSPLIT, $0-32
	MOVQ x+0(FP), DI
	MOVQ by+8(FP), SI
	MOVQ n+16(FP), CX
	VBROADCASTSD v+24(FP), Y7
	SHLQ $3, CX
	XORQ AX, AX

moveLoop:
	VMULPD (SI)(AX*1), Y7, Y0
	VADDPD (DI)(AX*1), Y0, Y0
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   moveLoop
	VZEROUPPER
	RET

// func reflectWide(x, by *float64, n int, v, limit float64) (over bool)
TEXT ·reflectWide(SB), NOSPLIT, $0-41
	MOVQ x+0(FP), DI
	MOVQ by+8(FP), SI
	MOVQ n+16(FP), CX
	VBROADCASTSD v+24(FP), Y7
	VBROADCASTSD limit+32(FP), Y5
	VXORPD Y4, Y4, Y4
	VPCMPEQD Y6, Y6, Y6
	VPSRLQ $1, Y6, Y6
	SHLQ $3, CX
	XORQ AX, AX

reflectLoop:
	VMULPD (SI)(AX*1), Y7, Y0
	VADDPD (DI)(AX*1), Y0, Y0
	VANDPD Y6, Y0, Y0
	VCMPPD $0x16, Y5, Y0, Y1 // not ≤ the limit
	VORPD Y1, Y4, Y4
	VMOVUPD Y0, (DI)(AX*1)
	ADDQ $32, AX
	CMPQ AX, CX
	JB   reflectLoop
	VMOVMSKPD Y4, AX
	VZEROUPPER
	TESTL AX, AX
	SETNE over+40(FP)
	RET

// func withinWide(x *float64, n int, low, high float64) (within bool)
TEXT ·withinWide(SB), NOSPLIT, $0-33
	MOVQ x+0(FP), DI
	MOVQ n+8(FP), CX
	VBROADCASTSD low+16(FP), Y7
	VBROADCASTSD high+24(FP), Y5
	VXORPD Y4, Y4, Y4
	SHLQ $3, CX
	XORQ AX, AX

withinLoop:
	VMOVUPD (DI)(AX*1), Y0
	VCMPPD $0x1D, Y7, Y0, Y1 // ≥ low
	VCMPPD $0x12, Y5, Y0, Y2 // ≤ high
	VANDPD Y1, Y2, Y1
	VORPD Y1, Y4, Y4
	ADDQ $32, AX
	CMPQ AX, CX
	JB   withinLoop
	VMOVMSKPD Y4, AX
	VZEROUPPER
	TESTL AX, AX
	SETNE within+32(FP)
	RET

// func columnsWide(to *float64, room int, from *float64, n int)
TEXT ·columnsWide(SB), NOSPLIT, $0-32
	MOVQ to+0(FP), DI
	MOVQ room+8(FP), R8
	MOVQ from+16(FP), SI
	MOVQ n+24(FP), CX
	SHLQ $3, R8
	SHLQ $3, CX
	LEAQ (R8)(R8*2), R9
	LEAQ (SI)(CX*1), R10
	LEAQ (R10)(CX*1), R11
	LEAQ (R11)(CX*1), R12
	XORQ AX, AX

columnsLoop:
	VMOVUPD (SI)(AX*1), Y0
	VMOVUPD (R10)(AX*1), Y1
	VMOVUPD (R11)(AX*1), Y2
	VMOVUPD (R12)(AX*1), Y3
	VUNPCKLPD Y1, Y0, Y4
	VUNPCKHPD Y1, Y0, Y5
	VUNPCKLPD Y3, Y2, Y6
	VUNPCKHPD Y3, Y2, Y7
	VPERM2F128 $0x20, Y6, Y4, Y0
	VPERM2F128 $0x20, Y7, Y5, Y1
	VPERM2F128 $0x31, Y6, Y4, Y2
	VPERM2F128 $0x31, Y7, Y5, Y3
	VMOVUPD Y0, (DI)
	VMOVUPD Y1, (DI)(R8*1)
	VMOVUPD Y2, (DI)(R8*2)
	VMOVUPD Y3, (DI)(R9*1)
	LEAQ (DI)(R8*4), DI
	ADDQ $32, AX
	CMPQ AX, CX
	JB   columnsLoop
	VZEROUPPER
	RET
