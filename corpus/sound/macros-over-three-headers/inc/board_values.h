#define AREF_UV_X10     33000u      /* 100 uV */
#define ADC_STEPS       (1u << 12)
#define LOOP_OHM        165u
#define LOOP_ZERO_UA    4000u
#define LOOP_SPAN_UA    16000u
