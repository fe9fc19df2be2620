// The user asks to stop: INT, TERM or HUP. The first signal is a request that every wait sees at once;
// the second leaves the program at once with status 130.
//
// A signal belongs to the process, so this is the one piece of state that all threads share.
#pragma once

#include <string>

#include "stimuli/outcome.hpp"

namespace halflsb {

/// Installs the handlers and ignores PIPE, so that a closed pipe is an error of a write, not an end.
/// Calling it again changes nothing. HUP stays ignored when the caller had it ignored (nohup).
/// Errors (kind defect): the system has no descriptor left.
Outcome<void> watch_for_interrupts();

/// True from the first signal (or request_interrupt) on, but not while an InterruptLull lives.
bool interrupted();

/// A moment for tidying up after the request: waits do not see it meanwhile, so they need short deadlines. A second
/// signal still leaves the program at once.
class InterruptLull {
public:
    InterruptLull();
    ~InterruptLull();
    InterruptLull(const InterruptLull&) = delete;
    InterruptLull& operator=(const InterruptLull&) = delete;
};

/// Readable from the moment interrupted() is true, so that a wait can watch it; -1 before
/// watch_for_interrupts(). Never read or close it; duplicate it to hand it on.
int interrupt_descriptor();

/// "INT", "TERM" or "HUP"; "" when none came.
const char* interrupt_name();

/// The same as a first signal, without one. Safe in a signal handler.
void request_interrupt();

/// Forgets the request, for tests. Handlers stay installed.
void forget_interrupt();

/// What a wait returns that was ended by the request: kind interrupted.
Error interrupted_error(std::string place);

}  // namespace halflsb
