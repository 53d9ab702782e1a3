#include "go_asm.h"
#include "textflag.h"

// The constants of the loop, each of them four times.
#define FOUR(at, x) \
	DATA fillConstants<>+(at+0)(SB)/8, $x \
	DATA fillConstants<>+(at+8)(SB)/8, $x \
	DATA fillConstants<>+(at+16)(SB)/8, $x \
	DATA fillConstants<>+(at+24)(SB)/8, $x

FOUR(0, 0x0000000000000040)   // the bits of a word
FOUR(32, 0xffffffff00000000)  // its upper half
FOUR(64, 0x0000000000000ff0)  // a strip's place, times the size of a Strip
FOUR(96, 0x4330000000000000)  // 2⁵², whose last bit counts 1
FOUR(128, 0x4530000000000000) // 2⁸⁴, whose last bit counts 2³²
FOUR(160, 0x4530000000100000) // 2⁸⁴ + 2⁵²
FOUR(192, 0x3ff0000000000000) // 1
FOUR(224, 0x8000000000000000) // the sign
GLOBL fillConstants<>(SB), NOPTR|RODATA, $256

// ADVANCE takes the four states (high, low) on by the leap at c. Y14 and Y15 hold its
// multiplierLow and multiplierMiddle. With l₀, l₁ the halves of low, m₀, m₁ those of
// the low multiplier and c₀, c₁ those of the low increment,
//   p = l₀m₀ + c₀,  t = l₁m₀ + p/2³²,  v = l₀m₁ + c₁ + t mod 2³²
// hold no more than 64 bits each, low becomes p mod 2³² + 2³² v, and l₁m₁ + t/2³² + v/2³²
// is carried to high. The products of high words are wanted modulo 2⁶⁴, so that of
// their crossed halves only the lower halves count.
#define ADVANCE(c, high, low) \
	VPSRLQ $32, low, Y8 \
	VPMULUDQ Y15, Y8, Y9 \
	VPMULUDQ Y14, Y8, Y8 \
	VPMULUDQ Y15, low, Y10 \
	VPMULLD leap_turnedHigh(c), low, Y11 \
	VPMULUDQ leap_multiplierHigh(c), low, Y12 \
	VPMULUDQ Y14, low, low \
	VPADDQ leap_incrementMiddle(c), Y10, Y10 \
	VPADDQ leap_incrementLow(c), low, low \
	VPSRLQ $32, low, Y13 \
	VPADDQ Y13, Y8, Y8 \
	VPBLENDD $0x55, Y8, Y7, Y13 \
	VPSRLQ $32, Y8, Y8 \
	VPADDQ Y13, Y10, Y10 \
	VPADDQ Y8, Y9, Y9 \
	VPSLLQ $32, Y10, Y8 \
	VPSRLQ $32, Y10, Y10 \
	VPBLENDD $0x55, low, Y8, low \
	VPADDQ Y10, Y9, Y9 \
	VPMULLD leap_turnedLow(c), high, Y13 \
	VPMULUDQ Y14, high, high \
	VPADDQ leap_incrementHigh(c), Y9, Y9 \
	VPADDD Y11, Y13, Y13 \
	VPADDQ Y12, high, high \
	VPSLLQ $32, Y13, Y11 \
	VPAND Y6, Y13, Y13 \
	VPADDQ Y9, high, high \
	VPADDQ Y11, Y13, Y13 \
	VPADDQ Y13, high, high

// OUTPUT puts the numbers of four states into Y8: high ^ low, turned right by the first
// six bits of high.
#define OUTPUT(high, low) \
	VPXOR high, low, Y8 \
	VPSRLQ $58, high, Y9 \
	VPSRLVQ Y9, Y8, Y10 \
	VPSUBQ Y9, Y5, Y9 \
	VPSLLVQ Y9, Y8, Y8 \
	VPOR Y10, Y8, Y8

// STRIPS makes numbers of the bits in Y4, whose strips' places are on the stack: j·Width
// into Y10, and a mask of j < Inside into Y11, j the 53 bits b>>11. As a number, j is its
// upper 21 and lower 32 bits in the last places of large powers of two, which are taken
// off again.
#define STRIPS \
	MOVQ places-32(SP), R8 \
	MOVQ places-24(SP), R9 \
	MOVQ places-16(SP), R10 \
	MOVQ places-8(SP), R11 \
	VMOVUPD (SI)(R8*1), X9 \
	VMOVUPD (SI)(R9*1), X10 \
	VINSERTF128 $1, (SI)(R10*1), Y9, Y9 \
	VINSERTF128 $1, (SI)(R11*1), Y10, Y10 \
	VUNPCKLPD Y10, Y9, Y11 \
	VUNPCKHPD Y10, Y9, Y12 \
	VPSRLQ $11, Y4, Y9 \
	VPSRLQ $43, Y4, Y10 \
	VPCMPGTQ Y9, Y11, Y11 \
	VPOR 128(BX), Y10, Y10 \
	VPBLENDD $0xaa, 96(BX), Y9, Y9 \
	VSUBPD 160(BX), Y10, Y10 \
	VADDPD Y9, Y10, Y10 \
	VMULPD Y12, Y10, Y10

// func fillWide(dst *Batch, strips *[256]Strip, c *[3]leap, high, low uint64) (edges uint64)
TEXT ·fillWide(SB), NOSPLIT, $32-48
	MOVQ dst+0(FP), DI
	MOVQ strips+8(FP), SI
	MOVQ c+16(FP), DX
	LEAQ fillConstants<>(SB), BX
	VPBROADCASTQ high+24(FP), Y0
	VPBROADCASTQ low+32(FP), Y1
	VMOVDQA Y0, Y2
	VMOVDQA Y1, Y3
	VMOVDQU 0(BX), Y5
	VMOVDQU 32(BX), Y6
	VPXOR Y7, Y7, Y7
	VMOVDQU leap_multiplierLow(DX), Y14
	VMOVDQU leap_multiplierMiddle(DX), Y15
	ADVANCE(DX, Y0, Y1)
	ADDQ $leap__size, DX
	VMOVDQU leap_multiplierLow(DX), Y14
	VMOVDQU leap_multiplierMiddle(DX), Y15
	ADVANCE(DX, Y2, Y3)
	ADDQ $leap__size, DX
	VMOVDQU leap_multiplierLow(DX), Y14
	VMOVDQU leap_multiplierMiddle(DX), Y15
	XORQ AX, AX
	XORQ CX, CX
	JMP  numbers

loop:
	ADVANCE(DX, Y2, Y3)

numbers:
	// Exponential numbers: the places of their strips go to the stack, and come back
	// below, when they have got there.
	OUTPUT(Y0, Y1)
	VMOVDQA Y8, Y4
	VPSLLQ $4, Y8, Y9
	VPAND 64(BX), Y9, Y9
	VMOVDQU Y9, places-32(SP)
	// Units.
	OUTPUT(Y2, Y3)
	VPSRLQ $12, Y8, Y8
	VPOR 192(BX), Y8, Y8
	VSUBPD 192(BX), Y8, Y8
	VMOVUPD Y8, Batch_Unit(DI)(AX*1)
	ADVANCE(DX, Y0, Y1)
	STRIPS
	VBLENDVPD Y11, Y10, Y4, Y8
	VMOVUPD Y8, Batch_Exp(DI)(AX*1)
	VMOVMSKPD Y11, R8
	SHRQ $4, CX
	SHLQ $60, R8
	ORQ R8, CX
	ADDQ $32, AX
	CMPQ AX, $512
	JB   loop
	NOTQ CX
	MOVQ CX, edges+40(FP)
	VZEROUPPER
	RET

// NORMALS makes the normal numbers of four states, and takes the states on. The four
// places of their strips have got to the stack by then. The bits of those inside their
// strips go to the last four of CX.
#define NORMALS(high, low) \
	OUTPUT(high, low) \
	VMOVDQA Y8, Y4 \
	VPSLLQ $4, Y8, Y9 \
	VPAND 64(BX), Y9, Y9 \
	VMOVDQU Y9, places-32(SP) \
	ADVANCE(DX, high, low) \
	STRIPS \
	VPSLLQ $55, Y4, Y9 \
	VPAND 224(BX), Y9, Y9 \
	VPOR Y9, Y10, Y10 \
	VBLENDVPD Y11, Y10, Y4, Y8 \
	VMOVUPD Y8, (DI) \
	VMOVMSKPD Y11, R8 \
	SHRQ $4, CX \
	SHLQ $60, R8 \
	ORQ R8, CX \
	ADDQ $32, DI

// func normalsWide(dst *float64, n int, strips *[256]Strip, c *[3]leap, high, low uint64) (edges uint64)
TEXT ·normalsWide(SB), NOSPLIT, $32-56
	MOVQ dst+0(FP), DI
	MOVQ n+8(FP), AX
	MOVQ strips+16(FP), SI
	MOVQ c+24(FP), DX
	LEAQ fillConstants<>(SB), BX
	VPBROADCASTQ high+32(FP), Y0
	VPBROADCASTQ low+40(FP), Y1
	VMOVDQA Y0, Y2
	VMOVDQA Y1, Y3
	VMOVDQU 0(BX), Y5
	VMOVDQU 32(BX), Y6
	VPXOR Y7, Y7, Y7
	VMOVDQU leap_multiplierLow(DX), Y14
	VMOVDQU leap_multiplierMiddle(DX), Y15
	ADVANCE(DX, Y0, Y1)
	ADDQ $leap__size, DX
	VMOVDQU leap_multiplierLow(DX), Y14
	VMOVDQU leap_multiplierMiddle(DX), Y15
	ADVANCE(DX, Y2, Y3)
	ADDQ $leap__size, DX
	VMOVDQU leap_multiplierLow(DX), Y14
	VMOVDQU leap_multiplierMiddle(DX), Y15
	MOVQ $-1, CX
	MOVQ AX, R12

four:
	NORMALS(Y0, Y1)
	SUBQ $4, R12
	JZ   done
	NORMALS(Y2, Y3)
	SUBQ $4, R12
	JNZ  four

done:
	// The first numbers' bits go down to the last places; where there are fewer than 64,
	// ones stand beneath them.
	NOTQ CX
	VZEROUPPER
	NEGQ AX
	ADDQ $64, AX
	MOVQ AX, R9
	XCHGQ CX, R9
	SHRQ CX, R9
	MOVQ R9, edges+48(FP)
	RET
