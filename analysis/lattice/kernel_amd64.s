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

// func rowSums(rows, columns int, a *float64, stride int, x, y *float64)
//
// y[i] += Σ a[i,j]·x[j], with the same treatment of tiny numbers as panel.
TEXT ·rowSums(SB), NOSPLIT, $16-48
	STMXCSR mode-8(SP)
	MOVL    mode-8(SP), AX
	ORL     $0x8040, AX
	MOVL    AX, flush-16(SP)
	LDMXCSR flush-16(SP)
	MOVQ    rows+0(FP), R8
	MOVQ    columns+8(FP), R9
	MOVQ    a+16(FP), SI
	MOVQ    stride+24(FP), R10
	MOVQ    x+32(FP), DX
	MOVQ    y+40(FP), DI
	SHLQ    $3, R10
	SHLQ    $3, R9
	MOVQ    R9, R11
	ANDQ    $-32, R11

fourRows:
	CMPQ   R8, $4
	JLT    oneRow
	LEAQ   (SI)(R10*1), AX
	LEAQ   (SI)(R10*2), BX
	LEAQ   (AX)(R10*2), R13
	VXORPD Y0, Y0, Y0
	VXORPD Y1, Y1, Y1
	VXORPD Y2, Y2, Y2
	VXORPD Y3, Y3, Y3
	XORQ   CX, CX
	CMPQ   CX, R11
	JGE    fourFold

fourWide:
	VMOVUPD     (DX)(CX*1), Y4
	VFMADD231PD (SI)(CX*1), Y4, Y0
	VFMADD231PD (AX)(CX*1), Y4, Y1
	VFMADD231PD (BX)(CX*1), Y4, Y2
	VFMADD231PD (R13)(CX*1), Y4, Y3
	ADDQ        $32, CX
	CMPQ        CX, R11
	JLT         fourWide

fourFold:
	VEXTRACTF128 $1, Y0, X5
	VEXTRACTF128 $1, Y1, X6
	VEXTRACTF128 $1, Y2, X7
	VEXTRACTF128 $1, Y3, X8
	VADDPD       X5, X0, X0
	VADDPD       X6, X1, X1
	VADDPD       X7, X2, X2
	VADDPD       X8, X3, X3
	VHADDPD      X0, X0, X0
	VHADDPD      X1, X1, X1
	VHADDPD      X2, X2, X2
	VHADDPD      X3, X3, X3

fourTail:
	CMPQ        CX, R9
	JGE         fourDone
	VMOVSD      (DX)(CX*1), X4
	VFMADD231SD (SI)(CX*1), X4, X0
	VFMADD231SD (AX)(CX*1), X4, X1
	VFMADD231SD (BX)(CX*1), X4, X2
	VFMADD231SD (R13)(CX*1), X4, X3
	ADDQ        $8, CX
	JMP         fourTail

fourDone:
	VADDSD (DI), X0, X0
	VADDSD 8(DI), X1, X1
	VADDSD 16(DI), X2, X2
	VADDSD 24(DI), X3, X3
	VMOVSD X0, (DI)
	VMOVSD X1, 8(DI)
	VMOVSD X2, 16(DI)
	VMOVSD X3, 24(DI)
	ADDQ   $32, DI
	LEAQ   (SI)(R10*4), SI
	SUBQ   $4, R8
	JMP    fourRows

oneRow:
	CMPQ   R8, $1
	JLT    rowsDone
	VXORPD Y0, Y0, Y0
	XORQ   CX, CX
	CMPQ   CX, R11
	JGE    oneFold

oneWide:
	VMOVUPD     (DX)(CX*1), Y4
	VFMADD231PD (SI)(CX*1), Y4, Y0
	ADDQ        $32, CX
	CMPQ        CX, R11
	JLT         oneWide

oneFold:
	VEXTRACTF128 $1, Y0, X5
	VADDPD       X5, X0, X0
	VHADDPD      X0, X0, X0

oneTail:
	CMPQ        CX, R9
	JGE         oneDone
	VMOVSD      (DX)(CX*1), X4
	VFMADD231SD (SI)(CX*1), X4, X0
	ADDQ        $8, CX
	JMP         oneTail

oneDone:
	VADDSD (DI), X0, X0
	VMOVSD X0, (DI)
	ADDQ   $8, DI
	ADDQ   R10, SI
	DECQ   R8
	JMP    oneRow

rowsDone:
	VZEROUPPER
	LDMXCSR mode-8(SP)
	RET

// func columnSums(rows, columns int, a *float64, stride int, x, y *float64)
//
// y[j] += Σ x[i]·a[i,j], with the same treatment of tiny numbers as panel.
TEXT ·columnSums(SB), NOSPLIT, $16-48
	STMXCSR mode-8(SP)
	MOVL    mode-8(SP), AX
	ORL     $0x8040, AX
	MOVL    AX, flush-16(SP)
	LDMXCSR flush-16(SP)
	MOVQ    rows+0(FP), R8
	MOVQ    columns+8(FP), R9
	MOVQ    a+16(FP), SI
	MOVQ    stride+24(FP), R10
	MOVQ    x+32(FP), DX
	MOVQ    y+40(FP), DI
	SHLQ    $3, R10
	SHLQ    $3, R9
	MOVQ    R9, R11
	ANDQ    $-32, R11

fourMore:
	CMPQ         R8, $4
	JLT          oneMore
	LEAQ         (SI)(R10*1), AX
	LEAQ         (SI)(R10*2), BX
	LEAQ         (AX)(R10*2), R13
	VBROADCASTSD (DX), Y0
	VBROADCASTSD 8(DX), Y1
	VBROADCASTSD 16(DX), Y2
	VBROADCASTSD 24(DX), Y3
	XORQ         CX, CX
	CMPQ         CX, R11
	JGE          fourRest

fourAcross:
	VMOVUPD     (DI)(CX*1), Y4
	VMULPD      (SI)(CX*1), Y0, Y5
	VFMADD231PD (AX)(CX*1), Y1, Y4
	VFMADD231PD (BX)(CX*1), Y2, Y5
	VFMADD231PD (R13)(CX*1), Y3, Y4
	VADDPD      Y4, Y5, Y4
	VMOVUPD     Y4, (DI)(CX*1)
	ADDQ        $32, CX
	CMPQ        CX, R11
	JLT         fourAcross

fourRest:
	CMPQ        CX, R9
	JGE         fourNext
	VMOVSD      (DI)(CX*1), X4
	VFMADD231SD (SI)(CX*1), X0, X4
	VFMADD231SD (AX)(CX*1), X1, X4
	VFMADD231SD (BX)(CX*1), X2, X4
	VFMADD231SD (R13)(CX*1), X3, X4
	VMOVSD      X4, (DI)(CX*1)
	ADDQ        $8, CX
	JMP         fourRest

fourNext:
	ADDQ $32, DX
	LEAQ (SI)(R10*4), SI
	SUBQ $4, R8
	JMP  fourMore

oneMore:
	CMPQ         R8, $1
	JLT          columnsDone
	VBROADCASTSD (DX), Y0
	XORQ         CX, CX
	CMPQ         CX, R11
	JGE          oneRest

oneAcross:
	VMOVUPD     (DI)(CX*1), Y4
	VFMADD231PD (SI)(CX*1), Y0, Y4
	VMOVUPD     Y4, (DI)(CX*1)
	ADDQ        $32, CX
	CMPQ        CX, R11
	JLT         oneAcross

oneRest:
	CMPQ        CX, R9
	JGE         oneNext
	VMOVSD      (DI)(CX*1), X4
	VFMADD231SD (SI)(CX*1), X0, X4
	VMOVSD      X4, (DI)(CX*1)
	ADDQ        $8, CX
	JMP         oneRest

oneNext:
	ADDQ $8, DX
	ADDQ R10, SI
	DECQ R8
	JMP  oneMore

columnsDone:
	VZEROUPPER
	LDMXCSR mode-8(SP)
	RET
