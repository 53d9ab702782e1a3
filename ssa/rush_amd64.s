#include "go_asm.h"
#include "textflag.h"

// The rushes of one.go, pair.go and rows.go. Throughout,
//   SI entries   DI cores   R8 shifts   R9 bursty
//   R10 the lane   R11 the end of the lanes   R13 their begin   R12 the step, times 8
// and an event leaves its lane as it was until nothing can go wrong any more.
// Instructions an event: one row 24, pair 28, two rows 36, four 49, six 61, eight 73;
// the compiler makes 65 of the loop in Go for a pair, and more than 100 of that for four rows.

#define EXP lane_draws(R10)(R12*1)
#define UNIT (lane_draws+const_unitsAt)(R10)(R12*1)
#define TOTAL(at) 24(SI)(at*4)

// BEGIN finds the lanes; the arguments are those of n, step and i.
#define BEGIN(lanes, n, step, i) \
	MOVQ lanes, R13 \
	MOVQ n, AX \
	IMULQ $lane__size, AX \
	LEAQ (R13)(AX*1), R11 \
	MOVQ i, AX \
	IMULQ $lane__size, AX \
	LEAQ (R13)(AX*1), R10 \
	MOVQ step, R12 \
	SHLQ $3, R12

// ARGUMENTS loads those of all rushes but that of a pair.
#define ARGUMENTS \
	MOVQ entries+0(FP), SI \
	MOVQ cores+8(FP), DI \
	MOVQ shifts+16(FP), R8 \
	MOVQ bursty+24(FP), R9 \
	BEGIN(lanes+32(FP), n+40(FP), step+48(FP), i+56(FP))

// END gives the offsets.
#define END(step, i) \
	MOVQ R12, step \
	SUBQ R13, R10 \
	MOVQ R10, i \
	VZEROUPPER \
	RET

// TIME puts the time of the event into X4, from the total, and goes out if it is a
// NaN or later than next.
#define TIME(total, out) \
	VMOVSD EXP, X4 \
	VDIVSD total, X4, X4 \
	VADDSD lane_time(R10), X4, X4 \
	VMOVSD lane_next(R10), X5 \
	VUCOMISD X4, X5 \
	JCS out

// WITHIN puts the first of the running sums of an entry that, with those before, is
// above u into place: before is in every part of Y6, u in X5. The last sum of a row is
// always above u where the row is the right one.
#define WITHIN(at, place) \
	VADDPD (SI)(at*4), Y6, Y6 \
	VBROADCASTSD X5, Y7 \
	VCMPPD $0x11, Y6, Y7, Y6 \
	VMOVMSKPD Y6, place \
	TZCNTL place, place

// NEXT goes on to the next event.
#define NEXT(event) \
	ADDQ $lane__size, R10 \
	CMPQ R10, R11 \
	JB event \
	MOVQ R13, R10 \
	ADDQ $8, R12 \
	CMPQ R12, $(8*const_blockSteps) \
	JB event

// FIRST2 and MORE2 sum the totals of rows: those up to each go to the registers named,
// and what their cores have in common to AX.
#define FIRST2(sum0, sum1) \
	MOVL lane_at+0(R10), AX \
	MOVL lane_at+4(R10), BX \
	VMOVSD TOTAL(AX), sum0 \
	VADDSD TOTAL(BX), sum0, sum1 \
	MOVQ (DI)(AX*1), AX \
	ANDQ (DI)(BX*1), AX

#define MORE2(offset, sum0, sum1, sum2) \
	MOVL lane_at+offset+0(R10), BX \
	MOVL lane_at+offset+4(R10), CX \
	VADDSD TOTAL(BX), sum0, sum1 \
	VADDSD TOTAL(CX), sum1, sum2 \
	ANDQ (DI)(BX*1), AX \
	ANDQ (DI)(CX*1), AX

// CHOOSE goes out if the rows may be in a core, makes u, and begins with the last row.
#define CHOOSE(total, last, out) \
	TESTQ AX, AX \
	JNE out \
	VMULSD UNIT, total, X5 \
	MOVL $last, AX

// PASS keeps a sum and takes one off the row if u is below it.
#define PASS(sum, offset) \
	VMOVSD sum, before+offset(SP) \
	VUCOMISD sum, X5 \
	SBBQ $0, AX

// FIRE finds the place in row AX, goes out if it has bursts, and sets the time.
#define FIRE(out) \
	MOVL lane_at(R10)(AX*4), BX \
	VBROADCASTSD before-64(SP)(AX*8), Y6 \
	WITHIN(BX, CX) \
	LEAQ (CX)(AX*4), CX \
	BTQ CX, R9 \
	JCS out \
	VMOVSD X4, lane_time(R10) \
	SHLQ $5, CX

// SHIFT16 and SHIFT32 move the lane by two or four words of the shift at CX.
#define SHIFT16(offset) \
	VMOVDQU lane_at+offset(R10), X6 \
	VPADDQ offset(R8)(CX*1), X6, X6 \
	VMOVDQU X6, lane_at+offset(R10)

#define SHIFT32 \
	VMOVDQU lane_at(R10), Y6 \
	VPADDQ (R8)(CX*1), Y6, Y6 \
	VMOVDQU Y6, lane_at(R10)

// func rushPairWide(entries *entry, cores *uint64, shifts *[4]uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)
TEXT ·rushPairWide(SB), NOSPLIT, $0-72
	MOVQ entries+0(FP), SI
	MOVQ cores+8(FP), DI
	MOVQ shifts+16(FP), R8
	BEGIN(lanes+24(FP), n+32(FP), step+40(FP), i+48(FP))

event:
	MOVL lane_at+0(R10), AX
	MOVL lane_at+4(R10), BX
	VMOVSD TOTAL(AX), X0
	VADDSD TOTAL(BX), X0, X1
	TIME(X1, out)
	MOVQ (DI)(AX*1), DX
	TESTQ DX, (DI)(BX*1)
	JNE  out
	VMULSD UNIT, X1, X5
	VADDSD (SI)(BX*4), X0, X2
	XORL CX, CX
	VUCOMISD (SI)(AX*4), X5
	ADCQ $0, CX
	VUCOMISD X0, X5
	ADCQ $0, CX
	VUCOMISD X2, X5
	ADCQ $0, CX
	MOVQ (R8)(CX*8), DX
	VMOVSD X4, lane_time(R10)
	ADDQ DX, lane_at(R10)
	NEXT(event)

out:
	END(atStep+56(FP), atLane+64(FP))

// func rushOneWide(entries *entry, cores *uint64, shifts *[maxRows * groupWidth]position, bursty uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)
TEXT ·rushOneWide(SB), NOSPLIT, $0-80
	ARGUMENTS
	VXORPD X6, X6, X6

event:
	MOVL lane_at(R10), AX
	VMOVSD TOTAL(AX), X1
	TIME(X1, out)
	CMPQ (DI)(AX*1), $0
	JNE  out
	VMULSD UNIT, X1, X5
	VBROADCASTSD X5, Y7
	VCMPPD $0x11, (SI)(AX*4), Y7, Y6
	VMOVMSKPD Y6, CX
	TZCNTL CX, CX
	BTQ  CX, R9
	JCS  out
	VMOVSD X4, lane_time(R10)
	SHLQ $5, CX
	MOVQ (R8)(CX*1), DX
	ADDQ DX, lane_at(R10)
	NEXT(event)

out:
	END(atStep+64(FP), atLane+72(FP))

// func rushTwoWide(entries *entry, cores *uint64, shifts *[maxRows * groupWidth]position, bursty uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)
TEXT ·rushTwoWide(SB), NOSPLIT, $64-80
	ARGUMENTS
	MOVQ $0, before-64(SP)

event:
	FIRST2(X0, X1)
	TIME(X1, out)
	CHOOSE(X1, 1, out)
	PASS(X0, -56)
	FIRE(out)
	MOVQ (R8)(CX*1), DX
	ADDQ DX, lane_at(R10)
	NEXT(event)

out:
	END(atStep+64(FP), atLane+72(FP))

// func rushFourWide(entries *entry, cores *uint64, shifts *[maxRows * groupWidth]position, bursty uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)
TEXT ·rushFourWide(SB), NOSPLIT, $64-80
	ARGUMENTS
	MOVQ $0, before-64(SP)

event:
	FIRST2(X0, X1)
	MORE2(8, X1, X2, X3)
	TIME(X3, out)
	CHOOSE(X3, 3, out)
	PASS(X0, -56)
	PASS(X1, -48)
	PASS(X2, -40)
	FIRE(out)
	SHIFT16(0)
	NEXT(event)

out:
	END(atStep+64(FP), atLane+72(FP))

// func rushSixWide(entries *entry, cores *uint64, shifts *[maxRows * groupWidth]position, bursty uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)
TEXT ·rushSixWide(SB), NOSPLIT, $64-80
	ARGUMENTS
	MOVQ $0, before-64(SP)

event:
	FIRST2(X0, X1)
	MORE2(8, X1, X2, X3)
	MORE2(16, X3, X8, X9)
	TIME(X9, out)
	CHOOSE(X9, 5, out)
	PASS(X0, -56)
	PASS(X1, -48)
	PASS(X2, -40)
	PASS(X3, -32)
	PASS(X8, -24)
	FIRE(out)
	SHIFT32
	NEXT(event)

out:
	END(atStep+64(FP), atLane+72(FP))

// func rushEightWide(entries *entry, cores *uint64, shifts *[maxRows * groupWidth]position, bursty uint64, lanes *lane, n, step, i int) (atStep, atLane uintptr)
TEXT ·rushEightWide(SB), NOSPLIT, $64-80
	ARGUMENTS
	MOVQ $0, before-64(SP)

event:
	FIRST2(X0, X1)
	MORE2(8, X1, X2, X3)
	MORE2(16, X3, X8, X9)
	MORE2(24, X9, X10, X11)
	TIME(X11, out)
	CHOOSE(X11, 7, out)
	PASS(X0, -56)
	PASS(X1, -48)
	PASS(X2, -40)
	PASS(X3, -32)
	PASS(X8, -24)
	PASS(X9, -16)
	PASS(X10, -8)
	FIRE(out)
	SHIFT32
	NEXT(event)

out:
	END(atStep+64(FP), atLane+72(FP))
