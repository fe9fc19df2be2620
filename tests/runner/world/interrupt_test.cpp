// Signals in child processes, so that the test program itself is never at risk.
#include "runner/world/interrupt.hpp"

#include <poll.h>
#include <sys/wait.h>
#include <unistd.h>

#include <catch2/catch.hpp>
#include <cerrno>
#include <csignal>
#include <functional>

using namespace halflsb;

namespace {

/// The status with which a child ends that runs `work`; its return value is its exit status.
int child_status(const std::function<int()>& work) {
    const pid_t child = fork();
    if (child == 0) _exit(work());
    REQUIRE(child > 0);
    int status = 0;
    REQUIRE(waitpid(child, &status, 0) == child);
    return WIFEXITED(status) ? WEXITSTATUS(status) : -WTERMSIG(status);
}

bool is_readable(int descriptor, int wait_ms) {
    pollfd watched{descriptor, POLLIN, 0};
    int result = 0;
    do {
        result = poll(&watched, 1, wait_ms);
    } while (result < 0 && errno == EINTR);
    return result == 1 && (watched.revents & POLLIN) != 0;
}

}  // namespace

TEST_CASE("interrupt: the first INT, TERM or HUP is a request that a wait can watch", "[world]") {
    for (const int number : {SIGINT, SIGTERM, SIGHUP}) {
        CAPTURE(number);
        const int status = child_status([&] {
            std::signal(SIGHUP, SIG_DFL);
            if (!watch_for_interrupts() || !watch_for_interrupts()) return 1;
            if (interrupted() || is_readable(interrupt_descriptor(), 0)) return 2;
            raise(number);
            if (!interrupted()) return 3;
            if (!is_readable(interrupt_descriptor(), 0)) return 4;
            const std::string name = number == SIGINT ? "INT" : number == SIGTERM ? "TERM" : "HUP";
            const Error error = interrupted_error("here");
            if (error.kind != ErrorKind::interrupted || to_text(error) != "here: interrupted by " + name) return 5;
            return 0;
        });
        CHECK(status == 0);
    }
}

TEST_CASE("interrupt: it ends a wait that has begun", "[world]") {
    const int status = child_status([] {
        if (!watch_for_interrupts()) return 1;
        const pid_t parent = getpid();
        const pid_t sender = fork();
        if (sender == 0) {
            // The wait below is a minute: only the signal can end it sooner.
            kill(parent, SIGTERM);
            _exit(0);
        }
        const bool woken = is_readable(interrupt_descriptor(), 60'000);
        int ignored = 0;
        while (waitpid(sender, &ignored, 0) < 0 && errno == EINTR) {
        }
        return woken && interrupted() ? 0 : 2;
    });
    CHECK(status == 0);
}

TEST_CASE("interrupt: the second signal leaves at once with 130", "[world]") {
    const int status = child_status([] {
        if (!watch_for_interrupts()) return 1;
        raise(SIGINT);
        raise(SIGTERM);
        return 2;
    });
    CHECK(status == 130);
}

TEST_CASE("interrupt: a closed pipe is an error of the write", "[world]") {
    const int status = child_status([] {
        if (!watch_for_interrupts()) return 1;
        int ends[2];
        if (pipe(ends) != 0) return 2;
        close(ends[0]);
        return write(ends[1], "x", 1) == -1 && errno == EPIPE ? 0 : 3;
    });
    CHECK(status == 0);
}

TEST_CASE("interrupt: HUP stays ignored under nohup, the others do not", "[world]") {
    const int status = child_status([] {
        std::signal(SIGHUP, SIG_IGN);
        std::signal(SIGINT, SIG_IGN);
        if (!watch_for_interrupts()) return 1;
        raise(SIGHUP);
        if (interrupted()) return 2;
        raise(SIGINT);
        return interrupted() ? 0 : 3;
    });
    CHECK(status == 0);
}

TEST_CASE("interrupt: a request without a signal, made before anybody watches, is seen", "[world]") {
    const int status = child_status([] {
        request_interrupt();
        if (!interrupted() || !watch_for_interrupts()) return 1;
        if (!is_readable(interrupt_descriptor(), 0)) return 2;
        if (interrupted_error("here").problem != "interrupted") return 3;
        forget_interrupt();
        if (interrupted() || is_readable(interrupt_descriptor(), 0)) return 4;
        return 0;
    });
    CHECK(status == 0);
}

TEST_CASE("interrupt: a lull hides the request for as long as it lives", "[world]") {
    CHECK_FALSE(interrupted());
    {
        const InterruptLull before;
        request_interrupt();
        CHECK_FALSE(interrupted());
        {
            const InterruptLull inner;
            CHECK_FALSE(interrupted());
        }
        CHECK_FALSE(interrupted());
    }
    CHECK(interrupted());
    {
        const InterruptLull after;
        CHECK_FALSE(interrupted());
    }
    CHECK(interrupted());
    forget_interrupt();
    CHECK_FALSE(interrupted());
}

TEST_CASE("interrupt: in a lull a second signal still leaves at once", "[world]") {
    const int status = child_status([] {
        if (!watch_for_interrupts()) return 1;
        raise(SIGINT);
        const InterruptLull lull;
        if (interrupted()) return 2;
        raise(SIGINT);
        return 3;
    });
    CHECK(status == 130);
}
