#define ADC_BATT_IX     0
#define ADC_BATT_NUM    33000u
#define ADC_LOGIC_IX    3
#define ADC_LOGIC_NUM   6000u
#define ADC_DEN         4096u

#define CAT(a, b, c)    a##b##c
#define RAW(ch)         adc_regs[CAT(ADC_, ch, _IX)]
#define SCALED(ch)      ((uint32_t)RAW(ch) * CAT(ADC_, ch, _NUM) / ADC_DEN)

#define DEFINE_GETTER(name, ch) \
    uint32_t get_##name##_mv(void) { return SCALED(ch); }
