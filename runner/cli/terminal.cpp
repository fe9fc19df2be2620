#include "runner/cli/terminal.hpp"

#include <poll.h>
#include <sys/ioctl.h>
#include <unistd.h>

#include <algorithm>
#include <cerrno>
#include <charconv>
#include <csignal>
#include <cstdlib>
#include <cstring>

namespace halflsb {

namespace {

constexpr int usual_columns = 80;
constexpr int fewest_columns = 40;
constexpr int most_columns = 1000;

int descriptor_of(Stream stream) { return stream == Stream::out ? STDOUT_FILENO : STDERR_FILENO; }

bool knows_escapes(const Terminal& terminal) {
    const std::string term = terminal.environment("TERM").value_or("");
    return !term.empty() && term != "dumb";
}

}  // namespace

SystemTerminal::SystemTerminal() : pipe_handler_before_(std::signal(SIGPIPE, SIG_IGN)) {}

SystemTerminal::~SystemTerminal() {
    if (pipe_handler_before_ != SIG_ERR) std::signal(SIGPIPE, pipe_handler_before_);
}

bool SystemTerminal::is_terminal(Stream stream) const { return ::isatty(descriptor_of(stream)) == 1; }

int SystemTerminal::reported_columns(Stream stream) const {
    winsize size{};
    return ::ioctl(descriptor_of(stream), TIOCGWINSZ, &size) == 0 ? size.ws_col : 0;
}

std::optional<std::string> SystemTerminal::environment(const std::string& name) const {
    const char* value = std::getenv(name.c_str());
    return value == nullptr ? std::nullopt : std::optional<std::string>(value);
}

Outcome<void> SystemTerminal::write(Stream stream, std::string_view text) {
    bool& reader_gone = reader_gone_[stream == Stream::out ? 0 : 1];
    const int descriptor = descriptor_of(stream);
    while (!text.empty() && !reader_gone) {
        const ssize_t written = ::write(descriptor, text.data(), text.size());
        if (written >= 0) {
            text.remove_prefix(static_cast<std::size_t>(written));
        } else if (errno == EPIPE) {
            reader_gone = true;
        } else if (errno == EAGAIN) {
            // Another program that shares the terminal made it non-blocking.
            pollfd ready{descriptor, POLLOUT, 0};
            (void)::poll(&ready, 1, 100);
        } else if (errno != EINTR) {
            const bool out = stream == Stream::out;
            return Error{ErrorKind::output, out ? "standard output" : "standard error",
                         "cannot be written: " + std::string(std::strerror(errno)),
                         "the finished cases are in the run folder; free some space or redirect elsewhere"};
        }
    }
    return {};
}

bool wants_colour(const Terminal& terminal, Stream stream, ColourWish wish) {
    if (wish != ColourWish::automatic) return wish == ColourWish::always;
    return terminal.is_terminal(stream) && knows_escapes(terminal) &&
           terminal.environment("NO_COLOR").value_or("").empty();
}

int columns_for(const Terminal& terminal, Stream stream) {
    const std::string text = terminal.environment("COLUMNS").value_or("");
    int columns = 0;
    const auto [end, error] = std::from_chars(text.data(), text.data() + text.size(), columns);
    if (error != std::errc() || end != text.data() + text.size() || columns <= 0)
        columns = terminal.reported_columns(stream);
    if (columns <= 0) columns = usual_columns;
    return std::clamp(columns, fewest_columns, most_columns);
}

bool shows_unicode(const Terminal& terminal) {
    for (const char* name : {"LC_ALL", "LC_CTYPE", "LANG"}) {
        std::string value = terminal.environment(name).value_or("");
        if (value.empty()) continue;
        // ASCII by hand: tolower() would follow the locale.
        for (char& c : value) c = c >= 'A' && c <= 'Z' ? static_cast<char>(c - 'A' + 'a') : c;
        return value.find("utf-8") != std::string::npos || value.find("utf8") != std::string::npos;
    }
    return false;
}

bool can_redraw(const Terminal& terminal, Stream stream) {
    return terminal.is_terminal(stream) && knows_escapes(terminal);
}

}  // namespace halflsb
