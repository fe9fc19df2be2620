#include "rigs/virtual-board/serve.hpp"

#include <poll.h>
#include <unistd.h>

#include <algorithm>
#include <array>
#include <cerrno>
#include <csignal>
#include <cstring>

#include "rigs/virtual-board/paced_line.hpp"
#include "rigs/virtual-board/statistics.hpp"

namespace halflsb::board {

namespace {

// Coarse enough to leave the processor to others, fine enough to look like a line: 1 ms is asked for.
constexpr Nanoseconds chunk_ns = 500'000;
// A board that computes no further while so much waits to be sent: as one whose transmit buffer is full.
constexpr std::size_t output_bytes_most = 1 << 18;

volatile std::sig_atomic_t end_asked = 0;
volatile std::sig_atomic_t statistics_asked = 0;

extern "C" void on_end(int) { end_asked = 1; }
extern "C" void on_statistics(int) { statistics_asked = 1; }

class Server {
public:
    Server(const PseudoTerminal& terminal, Board& board, const Options& options, const Faults& faults)
        : terminal_(terminal),
          descriptor_(terminal.descriptor()),
          board_(board),
          faults_(faults.line),
          in_(options.baud),
          out_(options.baud),
          spoilt_in_(faults_.flip_in_every, faults_.drop_in_every, 0),
          spoilt_out_(faults_.flip_every, faults_.drop_every, faults_.repeat_every) {}

    void power_up() {
        board_.start();
        if (faults_.garbage) say(boot_message());
        to_boot_message_ = faults_.garbage;
    }
    void take_input(Nanoseconds now);
    void let_board_work(Nanoseconds now);
    void give_output(Nanoseconds now);
    void wait(Nanoseconds now, const sigset_t& signals);

    bool failed() const { return failed_; }
    bool is_unplugged() const {
        return faults_.unplug_after != 0 && board_.blocks() >= faults_.unplug_after && output_.empty();
    }
    std::uint64_t bytes_in() const { return in_.bytes(); }
    std::uint64_t bytes_out() const { return out_.bytes(); }
    const Statistics& statistics() const { return statistics_; }

private:
    void say(const std::vector<std::uint8_t>& bytes) { spoilt_out_.append(bytes.data(), bytes.size(), output_); }
    void count_blocks(Nanoseconds now);
    std::size_t until_stall() const {
        return faults_.stall_every == 0 ? output_.size() : faults_.stall_every - out_.bytes() % faults_.stall_every;
    }

    const PseudoTerminal& terminal_;
    int descriptor_;
    Board& board_;
    LineFaults faults_;
    PacedLine in_, out_;
    SpoiltDirection spoilt_in_, spoilt_out_;
    FirstStream first_stream_;
    Statistics statistics_;
    std::vector<std::uint8_t> output_, spoilt_;
    std::array<std::uint8_t, 16384> input_{};
    std::uint64_t blocks_ = 0, samples_ = 0, resets_ = 0;
    Nanoseconds stalled_until_ = 0;
    bool input_waits_ = false;     // there may be more to read
    bool output_blocked_ = false;  // the host does not read
    bool to_boot_message_ = false, restarted_ = false, failed_ = false;
};

void Server::take_input(Nanoseconds now) {
    while (input_waits_ && output_.size() < output_bytes_most) {
        const std::size_t most = std::min(in_.due(now), input_.size());
        if (most == 0) return;
        const ssize_t count = ::read(descriptor_, input_.data(), most);
        if (count <= 0) {
            // EIO: the last host has just closed and ours is not seen yet; the next poll tells.
            failed_ = count < 0 && errno != EAGAIN && errno != EINTR && errno != EIO;
            input_waits_ = false;
            in_.idle(now);
            return;
        }
        const auto got = static_cast<std::size_t>(count);
        in_.passed(got);
        if (to_boot_message_) {
            to_boot_message_ = false;
            say(boot_message());
        }
        spoilt_.clear();
        spoilt_in_.append(input_.data(), got, spoilt_);
        if (faults_.echo_only) {
            say(spoilt_);
        } else {
            board_.receive(spoilt_.data(), spoilt_.size());
            let_board_work(now);
        }
        if (got < most) {
            input_waits_ = false;
            in_.idle(now);
        }
    }
}

void Server::let_board_work(Nanoseconds now) {
    if (output_.empty()) out_.idle(now);
    while (output_.size() < output_bytes_most && board_.poll()) {
        const bool is_kept_back = faults_.first_stream_silent && first_stream_.has(board_.written());
        if (!faults_.silent && !is_kept_back) say(board_.written());
        board_.written().clear();
        count_blocks(now);
        if (faults_.restart_after != 0 && !restarted_ && board_.blocks() >= faults_.restart_after) {
            restarted_ = true;
            power_up();
        }
        if (faults_.unplug_after != 0 && board_.blocks() >= faults_.unplug_after) return;
    }
}

void Server::count_blocks(Nanoseconds now) {
    if (board_.resets() != resets_) statistics_.reset(board_.running_filter());
    resets_ = board_.resets();
    if (board_.blocks() != blocks_)
        statistics_.block(board_.samples() - samples_, now, {in_.idle_ns(), out_.idle_ns()});
    blocks_ = board_.blocks();
    samples_ = board_.samples();
}

void Server::give_output(Nanoseconds now) {
    output_blocked_ = false;
    std::size_t given = 0;
    while (given < output_.size() && now >= stalled_until_) {
        const std::size_t most = std::min({out_.due(now), output_.size() - given, until_stall()});
        if (most == 0) break;
        const ssize_t count = ::write(descriptor_, output_.data() + given, most);
        if (count <= 0) {
            output_blocked_ = true;
            out_.idle(now);
            break;
        }
        out_.passed(static_cast<std::size_t>(count));
        given += static_cast<std::size_t>(count);
        if (faults_.stall_every != 0 && out_.bytes() % faults_.stall_every == 0) {
            stalled_until_ = now + Nanoseconds{faults_.stall_ms} * 1'000'000;
            out_.idle(stalled_until_);
        }
    }
    output_.erase(output_.begin(), output_.begin() + static_cast<std::ptrdiff_t>(given));
    if (output_.empty()) out_.idle(now);
}

void Server::wait(Nanoseconds now, const sigset_t& signals) {
    Nanoseconds until = 0;  // 0: for ever
    const auto not_after = [&until](Nanoseconds time) { until = until == 0 ? time : std::min(until, time); };
    std::array<pollfd, 2> all = {{{descriptor_, 0, 0}, {terminal_.closings(), POLLIN, 0}}};
    pollfd& watched = all[0];
    if (!input_waits_) {
        watched.events |= POLLIN;
    } else if (output_.size() < output_bytes_most) {
        not_after(in_.is_paced() ? now + chunk_ns : now);
    }
    if (!output_.empty()) {
        if (output_blocked_) watched.events |= POLLOUT;
        if (now < stalled_until_) not_after(stalled_until_);
        if (!output_blocked_ && now >= stalled_until_) {
            not_after(out_.is_paced() ? std::min(now + chunk_ns, out_.time_of(output_.size())) : now);
        }
    }
    const Nanoseconds left = std::max<Nanoseconds>(0, until - now);
    const timespec timeout{left / 1'000'000'000, left % 1'000'000'000};
    const int ready = ::ppoll(all.data(), all.size(), until == 0 ? nullptr : &timeout, &signals);
    if (ready > 0 && (watched.revents & (POLLIN | POLLHUP)) != 0) {
        in_.idle(now_ns());  // the byte that came begins now
        input_waits_ = true;
    }
    if (ready > 0 && all[1].revents != 0) terminal_.forget_claim();
    failed_ = failed_ || (ready < 0 && errno != EINTR);
}

}  // namespace

void take_signals() {
    sigset_t all;
    sigemptyset(&all);
    struct sigaction end {};
    end.sa_handler = on_end;
    struct sigaction statistics {};
    statistics.sa_handler = on_statistics;
    for (int signal : {SIGTERM, SIGINT, SIGHUP}) {
        sigaddset(&all, signal);
        sigaction(signal, &end, nullptr);
    }
    sigaddset(&all, SIGUSR1);
    sigaction(SIGUSR1, &statistics, nullptr);
    sigprocmask(SIG_BLOCK, &all, nullptr);  // ppoll lets them in
}

std::string serve(const PseudoTerminal& terminal, Board& board, const Options& options, const Faults& faults) {
    sigset_t none;
    sigemptyset(&none);
    Server server(terminal, board, options, faults);
    const auto write_account = [&] {
        if (options.stats_file.empty()) return std::string();
        const Account account{terminal.device(), options.baud, faults.names, server.bytes_in(), server.bytes_out()};
        return write_statistics(options.stats_file, statistics_json(account, server.statistics()));
    };
    server.power_up();
    sigset_t blocked;
    while (!server.failed() && !server.is_unplugged()) {
        // ppoll lets no signal in when a descriptor is ready at once: a busy line would put the end off for ever.
        sigprocmask(SIG_SETMASK, &none, &blocked);
        sigprocmask(SIG_SETMASK, &blocked, nullptr);
        if (end_asked != 0) break;
        const Nanoseconds now = now_ns();
        server.take_input(now);
        server.let_board_work(now);
        server.give_output(now);
        server.wait(now, none);
        if (statistics_asked != 0) {
            statistics_asked = 0;
            if (const std::string problem = write_account(); !problem.empty()) return problem;
        }
    }
    const std::string problem = write_account();
    return server.failed() ? terminal.device() + ": " + std::strerror(errno) : problem;
}

}  // namespace halflsb::board
