// A model board behind a pseudo-terminal, answering until it is destroyed.
#pragma once

#include <atomic>
#include <string>
#include <thread>

#include "tests/support/model_board.hpp"
#include "tests/support/pty_pair.hpp"

namespace halflsb::diagnostics {

class ServedBoard {
public:
    ServedBoard() : thread_([this] { serve(); }) {}
    ~ServedBoard() {
        over_ = true;
        thread_.join();
    }
    ServedBoard(const ServedBoard&) = delete;
    ServedBoard& operator=(const ServedBoard&) = delete;
    const std::string& path() const { return pair_.path(); }

private:
    void serve() {
        while (!over_) {
            const auto answer = model_.receive(pair_.read(10));
            if (!answer.empty()) pair_.write(answer);
        }
    }

    test::PtyPair pair_;
    test::ModelBoard model_;
    std::atomic<bool> over_ = false;
    std::thread thread_;
};

}  // namespace halflsb::diagnostics
