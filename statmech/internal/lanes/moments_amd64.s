// Moments of energy levels, eight levels at a time; see moments.go.

#include "textflag.h"
#include "go_asm.h"

// The rows of the moments are found from the bits of y + 1.5·2⁵², whose lowest
// are i: 64 i is these bits shifted, less the shifted bits of 1.5·2⁵².
#define MAGIC   $0x4338000000000000
#define SHIFTED $0xCE00000000000000

#define SPREAD(bits, z) \
	MOVQ bits, AX \
	VPBROADCASTQ AX, z

// ONELEVEL adds a row of powers to the moments of level l of the group.
#define ONELEVEL(l, z) \
	MOVQ (8*l)(R12), AX \
	VADDPD (R8)(AX*1), z, z \
	VMOVUPD z, (R8)(AX*1)

// func moments8(m *Moments, e, weight *float64, groups int) int
//
// Z0 … Z7 = the powers g tⁿ, n = 0 … 7, of one level each. Z24 = Min, Z25 = Max,
// Z26 = From, Z27 = PerBin, Z28 = bits of the number of bins, Z29 = MAGIC,
// Z30 = 1/2, Z23 = bits by which weights differ from integers. R12 = 64 bytes
// of the stack for the shifted i, in one line of the cache.
TEXT ·moments8(SB), NOSPLIT, $128-40
	MOVQ m+0(FP), DI
	MOVQ e+8(FP), SI
	MOVQ weight+16(FP), R10
	MOVQ groups+24(FP), CX
	SHLQ $6, CX
	MOVQ Moments_Rows(DI), R8
	MOVQ SHIFTED, AX
	SUBQ AX, R8
	MOVQ Moments_Rows+8(DI), AX
	VCVTSI2SDQ AX, X28, X28
	VBROADCASTSD X28, Z28
	VBROADCASTSD Moments_From(DI), Z26
	VBROADCASTSD Moments_PerBin(DI), Z27
	VMOVUPD Moments_Min(DI), Z24
	VMOVUPD Moments_Max(DI), Z25
	SPREAD(MAGIC, Z29)
	SPREAD($0x3FE0000000000000, Z30)
	VPXORQ Z23, Z23, Z23
	LEAQ 63(SP), R12
	ANDQ $~63, R12
	XORQ DX, DX
	CMPQ DX, CX
	JGE  done

next:
	// The energies come from memory faster if asked for early.
	PREFETCHT0 4096(SI)(DX*1)
	PREFETCHT0 4096(R10)(DX*1)
	VMOVUPD (SI)(DX*1), Z16
	VMOVUPD (R10)(DX*1), Z8
	VSUBPD Z26, Z16, Z17
	VMULPD Z27, Z17, Z17
	VPCMPUQ $5, Z28, Z17, K1 // bits of y >= bits of bins: outside, or NaN
	VFPCLASSPDZ $0xdf, Z8, K2 // weight is NaN, infinite, zero or negative
	KORTESTB K1, K2
	JNE  done
	VMINPD Z24, Z16, Z24
	VMAXPD Z25, Z16, Z25
	VRNDSCALEPD $3, Z8, Z18
	VPTERNLOGQ $0xf6, Z18, Z8, Z23 // or the difference

	// i = y-1/2 to the nearest integer, t = (y-1/2)-i.
	VSUBPD Z30, Z17, Z17
	VADDPD Z29, Z17, Z18
	VBROADCASTSD X18, Z20
	VPSLLQ $6, Z18, Z19
	VMOVDQA64 Z19, (R12)
	VCMPPD $0, Z20, Z18, K3
	VSUBPD Z29, Z18, Z18
	VSUBPD Z18, Z17, Z17

	// g and g t of the even levels, of the odd ones; then those times t², t⁴, t⁶.
	VMULPD Z17, Z17, Z18
	VMULPD Z17, Z8, Z10
	VUNPCKLPD Z10, Z8, Z9
	VUNPCKHPD Z10, Z8, Z13
	VUNPCKLPD Z18, Z18, Z19
	VUNPCKHPD Z18, Z18, Z20
	VMULPD Z19, Z19, Z21
	VMULPD Z20, Z20, Z22
	VMULPD Z19, Z9, Z10
	VMULPD Z20, Z13, Z14
	VMULPD Z21, Z9, Z11
	VMULPD Z22, Z13, Z15
	VMULPD Z21, Z10, Z12
	VMULPD Z22, Z14, Z16

	// Transpose the pairs: Z9 … Z12 give the even levels, Z13 … Z16 the odd.
	VSHUFF64X2 $0x88, Z10, Z9, Z17
	VSHUFF64X2 $0xdd, Z10, Z9, Z18
	VSHUFF64X2 $0x88, Z12, Z11, Z19
	VSHUFF64X2 $0xdd, Z12, Z11, Z20
	VSHUFF64X2 $0x88, Z14, Z13, Z9
	VSHUFF64X2 $0xdd, Z14, Z13, Z10
	VSHUFF64X2 $0x88, Z16, Z15, Z11
	VSHUFF64X2 $0xdd, Z16, Z15, Z12
	VSHUFF64X2 $0x88, Z19, Z17, Z0
	VSHUFF64X2 $0xdd, Z19, Z17, Z4
	VSHUFF64X2 $0x88, Z20, Z18, Z2
	VSHUFF64X2 $0xdd, Z20, Z18, Z6
	VSHUFF64X2 $0x88, Z11, Z9, Z1
	VSHUFF64X2 $0xdd, Z11, Z9, Z5
	VSHUFF64X2 $0x88, Z12, Z10, Z3
	VSHUFF64X2 $0xdd, Z12, Z10, Z7
	KORTESTB K3, K3
	JCS  same
	ONELEVEL(0, Z0)
	ONELEVEL(1, Z1)
	ONELEVEL(2, Z2)
	ONELEVEL(3, Z3)
	ONELEVEL(4, Z4)
	ONELEVEL(5, Z5)
	ONELEVEL(6, Z6)
	ONELEVEL(7, Z7)
	ADDQ $64, DX
	CMPQ DX, CX
	JNE  next
	JMP  done

same:
	VADDPD Z1, Z0, Z0
	VADDPD Z3, Z2, Z2
	VADDPD Z5, Z4, Z4
	VADDPD Z7, Z6, Z6
	VADDPD Z2, Z0, Z0
	VADDPD Z6, Z4, Z4
	VADDPD Z4, Z0, Z0
	ONELEVEL(0, Z0)
	ADDQ $64, DX
	CMPQ DX, CX
	JNE  next

done:
	VMOVUPD Z24, Moments_Min(DI)
	VMOVUPD Z25, Moments_Max(DI)
	VPTESTMQ Z23, Z23, K1
	KORTESTB K1, K1
	JEQ  whole
	MOVB $1, Moments_Fractions(DI)
whole:
	VZEROUPPER
	SHRQ $6, DX
	MOVQ DX, ret+32(FP)
	RET
