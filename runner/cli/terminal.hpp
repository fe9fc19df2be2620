// The terminal, as a seam: what is on the other side of standard output and standard error, and the
// only place that writes to them. Tests use one with a memory.
#pragma once

#include <array>
#include <optional>
#include <string>
#include <string_view>

#include "stimuli/outcome.hpp"

namespace halflsb {

enum class Stream { out, err };

/// --color
enum class ColourWish { automatic, always, never };

class Terminal {
public:
    virtual ~Terminal() = default;
    virtual bool is_terminal(Stream stream) const = 0;
    /// What the terminal itself reports; 0 when it does not.
    virtual int reported_columns(Stream stream) const = 0;
    /// A variable of the environment.
    virtual std::optional<std::string> environment(const std::string& name) const = 0;
    /// Writes all of it. When the reader has closed the pipe that is no error: nothing more is written
    /// from then on. Any other failure (a full disk behind a redirection) is one of kind output.
    virtual Outcome<void> write(Stream stream, std::string_view text) = 0;
};

/// The process's own. SIGPIPE is ignored while it lives, so that a closed pipe is an answer to a write
/// and not the end of the program; a child process must set it back before exec.
class SystemTerminal final : public Terminal {
public:
    SystemTerminal();
    ~SystemTerminal() override;
    SystemTerminal(const SystemTerminal&) = delete;
    SystemTerminal& operator=(const SystemTerminal&) = delete;

    bool is_terminal(Stream stream) const override;
    int reported_columns(Stream stream) const override;
    std::optional<std::string> environment(const std::string& name) const override;
    Outcome<void> write(Stream stream, std::string_view text) override;

private:
    std::array<bool, 2> reader_gone_{};
    void (*pipe_handler_before_)(int);
};

/// always and never decide; otherwise colour needs a terminal, a TERM that is set and not "dumb", and
/// no NO_COLOR with content.
bool wants_colour(const Terminal& terminal, Stream stream, ColourWish wish);

/// COLUMNS, else what the terminal reports, else 80; never below 40 nor above 1000.
int columns_for(const Terminal& terminal, Stream stream);

/// The locale's encoding is UTF-8: the first of LC_ALL, LC_CTYPE and LANG that is not empty says so.
bool shows_unicode(const Terminal& terminal);

/// A line can be drawn over: a terminal whose TERM is set and not "dumb".
bool can_redraw(const Terminal& terminal, Stream stream);

}  // namespace halflsb
