// The only include of Boost.Asio.
//
// Boost 1.74's Asio uses std::exchange without including <utility>, and with clang 14 it looks for
// coroutines in a header that libstdc++ does not have unless it is told.
#pragma once

#include <utility>

#if defined(__clang__)
#define BOOST_ASIO_HAS_CO_AWAIT 1
#define BOOST_ASIO_HAS_STD_COROUTINE 1
#endif

#include <boost/asio/buffer.hpp>
#include <boost/asio/error.hpp>
#include <boost/asio/io_context.hpp>
#include <boost/asio/posix/stream_descriptor.hpp>
#include <boost/asio/steady_timer.hpp>
