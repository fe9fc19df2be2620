#include "runner/world/command.hpp"

#include <fcntl.h>
#include <poll.h>
#include <signal.h>
#include <spawn.h>
#include <spdlog/spdlog.h>
#include <sys/wait.h>
#include <unistd.h>

#include <array>
#include <cerrno>
#include <cstring>

#include "runner/world/interrupt.hpp"
#include "stimuli/number_text.hpp"

extern char** environ;

namespace halflsb {
namespace {

constexpr std::size_t kept_output_bytes = 2000;

std::string joined(const std::vector<std::string>& arguments) {
    std::string text;
    for (const std::string& argument : arguments) text += (text.empty() ? "" : " ") + argument;
    return text;
}

/// The output of the command: its last part for the error, its lines for the diagnostics.
class Output {
public:
    void add(std::string_view bytes) {
        tail_ += bytes;
        if (tail_.size() > kept_output_bytes) tail_.erase(0, tail_.size() - kept_output_bytes);
        line_ += bytes;
        for (std::size_t end = line_.find('\n'); end != std::string::npos; end = line_.find('\n')) {
            spdlog::info("| {}", line_.substr(0, end));
            line_.erase(0, end + 1);
        }
        if (line_.size() > kept_output_bytes) line_.clear();
    }
    std::string tail() const {
        std::string text = tail_;
        while (!text.empty() && (text.back() == '\n' || text.back() == '\r')) text.pop_back();
        return text.empty() ? "it printed nothing" : "the last it printed:\n" + text;
    }

private:
    std::string tail_, line_;
};

struct Child {
    pid_t pid = -1;
    int output = -1;
};

Outcome<Child> start(const std::vector<std::string>& arguments, const std::string& folder) {
    std::array<int, 2> pipe_ends{};
    if (pipe2(pipe_ends.data(), O_CLOEXEC) != 0) {
        return Error{ErrorKind::bench, joined(arguments),
                     std::string("no pipe for its output: ") + std::strerror(errno), ""};
    }
    posix_spawn_file_actions_t actions;
    posix_spawn_file_actions_init(&actions);
    posix_spawn_file_actions_addchdir_np(&actions, folder.c_str());
    posix_spawn_file_actions_addopen(&actions, STDIN_FILENO, "/dev/null", O_RDONLY, 0);
    posix_spawn_file_actions_adddup2(&actions, pipe_ends[1], STDOUT_FILENO);
    posix_spawn_file_actions_adddup2(&actions, pipe_ends[1], STDERR_FILENO);
    posix_spawnattr_t attributes;
    posix_spawnattr_init(&attributes);
    // A group of its own, so that its children are stopped with it and Ctrl-C is ours to handle.
    posix_spawnattr_setflags(&attributes, POSIX_SPAWN_SETPGROUP | POSIX_SPAWN_SETSIGDEF);
    posix_spawnattr_setpgroup(&attributes, 0);
    sigset_t defaults;
    sigemptyset(&defaults);
    for (const int signal_number : {SIGINT, SIGTERM, SIGHUP, SIGPIPE}) sigaddset(&defaults, signal_number);
    posix_spawnattr_setsigdefault(&attributes, &defaults);

    std::vector<std::string> copies = arguments;
    std::vector<char*> argv;
    for (std::string& copy : copies) argv.push_back(copy.data());
    argv.push_back(nullptr);
    Child child;
    const int failed = posix_spawnp(&child.pid, argv[0], &actions, &attributes, argv.data(), environ);
    posix_spawn_file_actions_destroy(&actions);
    posix_spawnattr_destroy(&attributes);
    close(pipe_ends[1]);
    if (failed != 0) {
        close(pipe_ends[0]);
        return Error{ErrorKind::bench, joined(arguments),
                     std::string("cannot be started in ") + folder + ": " + std::strerror(failed),
                     "commands run in the rig's folder; check the path and its run bit"};
    }
    child.output = pipe_ends[0];
    fcntl(child.output, F_SETFL, O_NONBLOCK);
    return child;
}

/// Reads what is there; false at end of file.
bool drain(int descriptor, Output& output) {
    std::array<char, 4096> bytes;
    for (;;) {
        const ssize_t got = read(descriptor, bytes.data(), bytes.size());
        if (got > 0) {
            output.add({bytes.data(), static_cast<std::size_t>(got)});
        } else {
            return got < 0 && (errno == EAGAIN || errno == EINTR);
        }
    }
}

int stop(const Child& child) {
    int status = 0;
    kill(-child.pid, SIGTERM);
    for (int tries = 0; tries < 20; ++tries) {
        if (waitpid(child.pid, &status, WNOHANG) == child.pid) {
            kill(-child.pid, SIGKILL);
            return status;
        }
        poll(nullptr, 0, 25);
    }
    kill(-child.pid, SIGKILL);
    waitpid(child.pid, &status, 0);
    return status;
}

}  // namespace

Outcome<void> run_command(const std::vector<std::string>& arguments, const std::string& folder, Duration limit,
                          const Clock& clock) {
    const std::string name = joined(arguments);
    spdlog::info("running {}", name);
    auto started = start(arguments, folder);
    if (!started) return started.error();
    const Child child = *started;
    const Instant deadline = clock.now() + limit;
    Output output;
    int status = 0;
    bool open = true;
    Outcome<void> result;
    for (;;) {
        pollfd watched{child.output, POLLIN, 0};
        poll(&watched, open ? 1 : 0, 20);
        if (open) open = drain(child.output, output);
        if (waitpid(child.pid, &status, WNOHANG) == child.pid) {
            // A daemon it left behind may hold the pipe open; only what is there now is read.
            if (open) drain(child.output, output);
            if (WIFSIGNALED(status)) {
                result = Error{ErrorKind::bench, name,
                               "died of signal " + std::to_string(WTERMSIG(status)) + "; " + output.tail(),
                               "run it by hand in " + folder};
            } else if (WEXITSTATUS(status) != 0) {
                result = Error{ErrorKind::bench, name,
                               "ended with status " + std::to_string(WEXITSTATUS(status)) + "; " + output.tail(),
                               "run it by hand in " + folder};
            }
            break;
        }
        if (interrupted()) {
            stop(child);
            result = Error{ErrorKind::interrupted, name, "stopped on request", ""};
            break;
        }
        if (clock.now() >= deadline) {
            stop(child);
            result = Error{ErrorKind::bench, name,
                           "ran longer than " + number_text(to_seconds(limit)) + " s and was stopped; " + output.tail(),
                           "raise before_run_limit_s in [commands], or find out what it waits for"};
            break;
        }
    }
    close(child.output);
    return result;
}

}  // namespace halflsb
