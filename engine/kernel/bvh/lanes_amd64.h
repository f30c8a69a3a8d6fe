// What the walks in assembly share: the layout of lanes (see wide_amd64.go), at R8, and edge functions in float64.

#define L_ENTER 0
#define L_T 32
#define L_US 64
#define L_VS 96
#define L_AX 128
#define L_AY 160
#define L_BX 192
#define L_BY 224
#define L_CX 256
#define L_CY 288
#define L_EU 320
#define L_EV 352
#define L_EW 384
#define L_NODES 416
#define L_BLOCKS 424
#define L_RUN 432
#define L_BEST 440
#define L_TIE 444
#define L_U 448
#define L_V 452
#define L_FOUND 456
#define L_STACK 512

// One edge function of lane DX in float64: p·q - r·s to e.
#define EXACT(p, q, r, s, e) \
	VCVTSS2SD p(R8)(DX*4), X8, X8 \
	VCVTSS2SD q(R8)(DX*4), X9, X9 \
	VCVTSS2SD r(R8)(DX*4), X10, X10 \
	VCVTSS2SD s(R8)(DX*4), X11, X11 \
	VMULSD X9, X8, X8 \
	VMULSD X11, X10, X10 \
	VSUBSD X10, X8, X8 \
	VCVTSD2SS X8, X8, X8 \
	VMOVSS X8, e(R8)(DX*4)
