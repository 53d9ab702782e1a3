#include "textflag.h"

// func panel(blocks, k int, a, b, c *float64, ldc int)
//
// c[6·blocks × 8] += a·b, where a is packed six rows at a time (k columns of
// six), b is packed eight columns wide (k rows of eight), and the rows of c lie
// ldc apart. Results and operands too small to be normal numbers count as zero,
// so that they cost no time; the caller's rounding mode is put back.
TEXT ·panel(SB), NOSPLIT, $16-48
	STMXCSR mode-8(SP)
	MOVL    mode-8(SP), AX
	ORL     $0x8040, AX
	MOVL    AX, flush-16(SP)
	LDMXCSR flush-16(SP)
	MOVQ    blocks+0(FP), R8
	MOVQ    k+8(FP), R9
	MOVQ    a+16(FP), SI
	MOVQ    b+24(FP), DX
	MOVQ    c+32(FP), DI
	MOVQ    ldc+40(FP), R10
	SHLQ    $3, R10

block:
	VXORPD Y0, Y0, Y0
	VXORPD Y1, Y1, Y1
	VXORPD Y2, Y2, Y2
	VXORPD Y3, Y3, Y3
	VXORPD Y4, Y4, Y4
	VXORPD Y5, Y5, Y5
	VXORPD Y6, Y6, Y6
	VXORPD Y7, Y7, Y7
	VXORPD Y8, Y8, Y8
	VXORPD Y9, Y9, Y9
	VXORPD Y10, Y10, Y10
	VXORPD Y11, Y11, Y11
	MOVQ   DX, BX
	MOVQ   R9, CX

step:
	VMOVUPD      (BX), Y12
	VMOVUPD      32(BX), Y13
	VBROADCASTSD (SI), Y14
	VBROADCASTSD 8(SI), Y15
	VFMADD231PD  Y12, Y14, Y0
	VFMADD231PD  Y13, Y14, Y1
	VFMADD231PD  Y12, Y15, Y2
	VFMADD231PD  Y13, Y15, Y3
	VBROADCASTSD 16(SI), Y14
	VBROADCASTSD 24(SI), Y15
	VFMADD231PD  Y12, Y14, Y4
	VFMADD231PD  Y13, Y14, Y5
	VFMADD231PD  Y12, Y15, Y6
	VFMADD231PD  Y13, Y15, Y7
	VBROADCASTSD 32(SI), Y14
	VBROADCASTSD 40(SI), Y15
	VFMADD231PD  Y12, Y14, Y8
	VFMADD231PD  Y13, Y14, Y9
	VFMADD231PD  Y12, Y15, Y10
	VFMADD231PD  Y13, Y15, Y11
	ADDQ         $48, SI
	ADDQ         $64, BX
	DECQ         CX
	JNZ          step

	VADDPD  (DI), Y0, Y0
	VADDPD  32(DI), Y1, Y1
	VMOVUPD Y0, (DI)
	VMOVUPD Y1, 32(DI)
	ADDQ    R10, DI
	VADDPD  (DI), Y2, Y2
	VADDPD  32(DI), Y3, Y3
	VMOVUPD Y2, (DI)
	VMOVUPD Y3, 32(DI)
	ADDQ    R10, DI
	VADDPD  (DI), Y4, Y4
	VADDPD  32(DI), Y5, Y5
	VMOVUPD Y4, (DI)
	VMOVUPD Y5, 32(DI)
	ADDQ    R10, DI
	VADDPD  (DI), Y6, Y6
	VADDPD  32(DI), Y7, Y7
	VMOVUPD Y6, (DI)
	VMOVUPD Y7, 32(DI)
	ADDQ    R10, DI
	VADDPD  (DI), Y8, Y8
	VADDPD  32(DI), Y9, Y9
	VMOVUPD Y8, (DI)
	VMOVUPD Y9, 32(DI)
	ADDQ    R10, DI
	VADDPD  (DI), Y10, Y10
	VADDPD  32(DI), Y11, Y11
	VMOVUPD Y10, (DI)
	VMOVUPD Y11, 32(DI)
	ADDQ    R10, DI
	DECQ    R8
	JNZ     block

	VZEROUPPER
	LDMXCSR mode-8(SP)
	RET

// func identify(leaf, part uint32) (a, b, c, d uint32)
TEXT ·identify(SB), NOSPLIT, $0-24
	MOVL leaf+0(FP), AX
	MOVL part+4(FP), CX
	CPUID
	MOVL AX, a+8(FP)
	MOVL BX, b+12(FP)
	MOVL CX, c+16(FP)
	MOVL DX, d+20(FP)
	RET

// func enabledState() uint32
TEXT ·enabledState(SB), NOSPLIT, $0-4
	XORL CX, CX
	XGETBV
	MOVL AX, ret+0(FP)
	RET
