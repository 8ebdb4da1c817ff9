#ifndef CONFIG_H
#define CONFIG_H
#define SAMPLES         16
#define SAMPLE_SHIFT    4
#define ADC_COUNTS      1024u
#define ADC_SUM_MAX     (SAMPLES * 1023)
#define VREF_MV         5000u
#endif
