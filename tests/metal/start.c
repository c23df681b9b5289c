/* What runs before main on the microcontroller: the FPU on, data in place. */
#include <stdint.h>

extern uint32_t stack_top[], data_begin[], data_end[], data_load[], bss_begin[], bss_end[];
int main(void);

#ifdef SEMIHOSTING
void initialise_monitor_handles(void);
_Noreturn void _exit(int code);
#endif

_Noreturn static void halt(void)
{
	for (;;)
		;
}

_Noreturn void reset(void)
{
	uint32_t *to, *from;
	int code;
	/* full access to coprocessors 10 and 11 */
	*(volatile uint32_t *)0xE000ED88u |= 0xFu << 20;
	__asm__ volatile("dsb\n\tisb" ::: "memory");
	for (to = data_begin, from = data_load; to < data_end;)
		*to++ = *from++;
	for (to = bss_begin; to < bss_end;)
		*to++ = 0;
#ifdef SEMIHOSTING
	initialise_monitor_handles();
#endif
	code = main();
#ifdef SEMIHOSTING
	_exit(code);
#endif
	(void)code;
	halt();
}

union vector {
	uint32_t *stack;
	void (*handler)(void);
};

__attribute__((section(".vectors"), used)) static const union vector vectors[16] = {
	{.stack = stack_top}, {.handler = reset}, {.handler = halt}, {.handler = halt},
	{.handler = halt},    {.handler = halt},  {.handler = halt},
};
