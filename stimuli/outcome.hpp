// A value or an error, for every function that can fail.
//
// Libraries of this project never print, throw across their face or exit: they return an Outcome.
// An Error has a kind (it decides the exit status), a place, a problem and a remedy.
#pragma once

#include <cassert>
#include <string>
#include <utility>
#include <variant>

namespace halflsb {

/// What an error is about; docs/exit-status.md lists what causes each.
enum class ErrorKind {
    usage,        ///< the command line: exit 64
    input,        ///< a plan, a rig or a file they name is wrong, the board untouched: exit 65
    bench,        ///< port, board or wire: something could not be captured: exit 3
    output,       ///< a result cannot be written: exit 73
    interrupted,  ///< INT, TERM or HUP: exit 130
    defect,       ///< our own: exit 70
};

struct Error {
    ErrorKind kind = ErrorKind::defect;
    std::string place;    ///< where: file:line:column, a port, a folder, or the name of a parameter
    std::string problem;  ///< what is wrong, quoting the offending value
    std::string remedy;   ///< what to do about it; empty when there is nothing to add
};

/// "place: problem\n  remedy", the parts that are there.
std::string to_text(const Error& error);

/// Either a T or an Error. Ask with operator bool before value() or error().
template <class T>
class [[nodiscard]] Outcome {
public:
    Outcome(T value) : content_(std::in_place_index<0>, std::move(value)) {}
    Outcome(Error error) : content_(std::in_place_index<1>, std::move(error)) {}

    explicit operator bool() const { return content_.index() == 0; }
    T& value() & { assert(*this); return *std::get_if<0>(&content_); }
    const T& value() const& { assert(*this); return *std::get_if<0>(&content_); }
    T&& value() && { assert(*this); return std::move(*std::get_if<0>(&content_)); }
    T* operator->() { return &value(); }
    const T* operator->() const { return &value(); }
    T& operator*() & { return value(); }
    const T& operator*() const& { return value(); }
    T&& operator*() && { return std::move(*this).value(); }
    const Error& error() const { assert(!*this); return *std::get_if<1>(&content_); }

private:
    std::variant<T, Error> content_;
};

/// Success without a value, or an Error.
template <>
class [[nodiscard]] Outcome<void> {
public:
    Outcome() = default;
    Outcome(Error error) : content_(std::move(error)) {}

    explicit operator bool() const { return content_.index() == 0; }
    const Error& error() const { assert(!*this); return *std::get_if<1>(&content_); }

private:
    std::variant<std::monostate, Error> content_;
};

}  // namespace halflsb
