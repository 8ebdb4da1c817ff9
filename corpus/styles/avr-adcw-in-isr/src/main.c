#include <avr/io.h>
#include <avr/interrupt.h>

static volatile unsigned int last;
volatile unsigned int show_mv;

ISR(ADC_vect)
{
    last = ADCW;
}

int main(void)
{
    unsigned int code;

    ADMUX = (1 << REFS1) | (1 << REFS0);
    ADCSRA = (1 << ADEN) | (1 << ADSC) | (1 << ADATE) | (1 << ADIE) | 7;
    sei();
    for (;;) {
        cli();
        code = last;
        sei();
        show_mv = (unsigned int)(((unsigned long)code * 17600UL) >> 10);
    }
}
