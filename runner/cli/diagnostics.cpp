#include "runner/cli/diagnostics.hpp"

#include <fcntl.h>
#include <spdlog/pattern_formatter.h>
#include <spdlog/sinks/base_sink.h>
#include <spdlog/sinks/null_sink.h>
#include <spdlog/spdlog.h>
#include <unistd.h>

#include <cerrno>
#include <cstring>
#include <functional>
#include <mutex>
#include <utility>
#include <vector>

#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

/// One escaped line a message, to wherever `put` puts it.
class LineSink final : public spdlog::sinks::base_sink<std::mutex> {
public:
    explicit LineSink(std::function<void(const std::string&)> put) : put_(std::move(put)) {}

protected:
    void sink_it_(const spdlog::details::log_msg& message) override {
        spdlog::memory_buf_t formatted;
        base_sink<std::mutex>::formatter_->format(message, formatted);
        std::string_view text(formatted.data(), formatted.size());
        while (!text.empty() && text.back() == '\n') text.remove_suffix(1);
        put_(printable_lines(text) + "\n");
    }
    void flush_() override {}

private:
    std::function<void(const std::string&)> put_;
};

/// The log file: says once on the terminal that it cannot be written any more.
class LogFile {
public:
    LogFile(int descriptor, std::string path, Terminal& terminal)
        : descriptor_(descriptor), path_(std::move(path)), terminal_(terminal) {}
    ~LogFile() { ::close(descriptor_); }
    LogFile(const LogFile&) = delete;
    LogFile& operator=(const LogFile&) = delete;

    void put(std::string_view text) {
        while (!text.empty() && !given_up_) {
            const ssize_t written = ::write(descriptor_, text.data(), text.size());
            if (written >= 0) {
                text.remove_prefix(static_cast<std::size_t>(written));
            } else if (errno != EINTR) {
                given_up_ = true;
                (void)static_cast<bool>(terminal_.write(
                    Stream::err, printable(path_) + ": the log cannot be continued: " + std::strerror(errno) + "\n"));
            }
        }
    }

private:
    int descriptor_;
    std::string path_;
    Terminal& terminal_;
    bool given_up_ = false;
};

spdlog::sink_ptr line_sink(std::function<void(const std::string&)> put, spdlog::level::level_enum level,
                           const char* pattern) {
    auto sink = std::make_shared<LineSink>(std::move(put));
    sink->set_level(level);
    sink->set_formatter(std::make_unique<spdlog::pattern_formatter>(pattern, spdlog::pattern_time_type::utc));
    return sink;
}

void use(std::shared_ptr<spdlog::logger> logger) {
    logger->set_level(spdlog::level::trace);
    logger->set_error_handler([](const std::string&) {});  // the usual one prints
    spdlog::set_default_logger(std::move(logger));
}

}  // namespace

Outcome<Diagnostics> Diagnostics::start(Terminal& terminal, bool verbose, const std::optional<std::string>& log_file) {
    std::vector<spdlog::sink_ptr> sinks;
    sinks.push_back(
        line_sink([&terminal](const std::string& line) { (void)static_cast<bool>(terminal.write(Stream::err, line)); },
                  verbose ? spdlog::level::debug : spdlog::level::warn, verbose ? "%H:%M:%S.%e %v" : "%v"));
    if (log_file) {
        const int descriptor = ::open(log_file->c_str(), O_WRONLY | O_CREAT | O_TRUNC | O_NOCTTY | O_NONBLOCK | O_CLOEXEC, 0666);
        if (descriptor < 0) {
            return Error{ErrorKind::output, *log_file,
                         "the log file cannot be opened: " + std::string(std::strerror(errno)),
                         "choose another file with --log"};
        }
        auto file = std::make_shared<LogFile>(descriptor, *log_file, terminal);
        sinks.push_back(line_sink([file](const std::string& line) { file->put(line); }, spdlog::level::trace,
                                  "%Y-%m-%dT%H:%M:%S.%eZ %l %v"));
    }
    use(std::make_shared<spdlog::logger>("halflsb", sinks.begin(), sinks.end()));
    return Diagnostics();
}

Diagnostics::Diagnostics(Diagnostics&& other) noexcept : active_(std::exchange(other.active_, false)) {}

Diagnostics::~Diagnostics() {
    if (active_) use(std::make_shared<spdlog::logger>("silent", std::make_shared<spdlog::sinks::null_sink_mt>()));
}

}  // namespace halflsb
