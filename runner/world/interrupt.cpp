#include "runner/world/interrupt.hpp"

#include <fcntl.h>
#include <sys/eventfd.h>
#include <unistd.h>

#include <atomic>
#include <cerrno>
#include <csignal>
#include <cstdint>
#include <cstring>

namespace halflsb {
namespace {

constexpr int exit_status_interrupted = 130;

// Lock-free atomics are the only shared state that a handler may touch besides sig_atomic_t.
std::atomic<int> requests{0};
std::atomic<int> lulls{0};
std::atomic<int> signal_number{0};
std::atomic<int> descriptor{-1};
static_assert(std::atomic<int>::is_always_lock_free);

void wake_waits() {
    const int fd = descriptor.load();
    if (fd < 0) return;
    const std::uint64_t one = 1;
    // A failure means that the counter is full: then it is readable already.
    [[maybe_unused]] const ssize_t ignored = write(fd, &one, sizeof one);
}

extern "C" void on_signal(int number) {
    if (requests.fetch_add(1) > 0) _exit(exit_status_interrupted);
    const int saved_errno = errno;
    signal_number.store(number);
    wake_waits();
    errno = saved_errno;
}

Error no_descriptor(const char* call) {
    return Error{ErrorKind::defect, "signals", std::string(call) + " failed: " + std::strerror(errno), ""};
}

}  // namespace

Outcome<void> watch_for_interrupts() {
    if (descriptor.load() < 0) {
        const int fd = eventfd(0, EFD_CLOEXEC | EFD_NONBLOCK);
        if (fd < 0) return no_descriptor("eventfd");
        descriptor.store(fd);
        if (interrupted()) wake_waits();
    }
    struct sigaction ignore {};
    ignore.sa_handler = SIG_IGN;
    if (sigaction(SIGPIPE, &ignore, nullptr) != 0) return no_descriptor("sigaction");

    struct sigaction action {};
    action.sa_handler = on_signal;
    sigemptyset(&action.sa_mask);
    // No SA_RESTART: a blocking call must return, so that its caller sees the request.
    for (const int number : {SIGINT, SIGTERM, SIGHUP}) {
        struct sigaction before {};
        if (sigaction(number, nullptr, &before) != 0) return no_descriptor("sigaction");
        if (number == SIGHUP && before.sa_handler == SIG_IGN) continue;
        if (sigaction(number, &action, nullptr) != 0) return no_descriptor("sigaction");
    }
    return {};
}

bool interrupted() { return requests.load() > 0 && lulls.load() == 0; }

InterruptLull::InterruptLull() { lulls.fetch_add(1); }

InterruptLull::~InterruptLull() { lulls.fetch_sub(1); }

int interrupt_descriptor() { return descriptor.load(); }

const char* interrupt_name() {
    switch (signal_number.load()) {
        case SIGINT:
            return "INT";
        case SIGTERM:
            return "TERM";
        case SIGHUP:
            return "HUP";
        default:
            return "";
    }
}

void request_interrupt() {
    requests.fetch_add(1);
    wake_waits();
}

void forget_interrupt() {
    requests.store(0);
    signal_number.store(0);
    const int fd = descriptor.load();
    std::uint64_t count = 0;
    if (fd >= 0) {
        [[maybe_unused]] const ssize_t ignored = read(fd, &count, sizeof count);
    }
}

Error interrupted_error(std::string place) {
    const std::string name = interrupt_name();
    return Error{ErrorKind::interrupted, std::move(place), name.empty() ? "interrupted" : "interrupted by " + name, ""};
}

}  // namespace halflsb
