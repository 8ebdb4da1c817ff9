#ifndef ADC_MAP_H
#define ADC_MAP_H
extern volatile unsigned short adc_words[8];
#define ADC_SLOT_PRESSURE   5
#define ADC_CODE(what)      adc_words[ADC_SLOT_##what]
#endif
