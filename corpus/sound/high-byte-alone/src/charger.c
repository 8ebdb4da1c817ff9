#include <avr/io.h>
#include <avr/interrupt.h>

volatile uint16_t charger_mv;

void charger_init(void)
{
    ADMUX = (1 << REFS0) | (1 << ADLAR) | 5;
    ADCSRA = (1 << ADEN) | (1 << ADIE) | (1 << ADPS2) | (1 << ADPS1) | (1 << ADPS0);
}

ISR(ADC_vect)
{
    uint8_t high = ADCH;

    charger_mv = (uint16_t)((uint32_t)high * 20000u / 256);
    ADCSRA |= (1 << ADSC);
}
