"""The worker processes, behind the standard executor; a pool that broke is replaced."""

from __future__ import annotations

import contextlib
import multiprocessing
from collections.abc import Callable, Iterator
from concurrent.futures import BrokenExecutor, Executor, Future, ProcessPoolExecutor
from queue import Empty, SimpleQueue
from typing import Any

from sheetqc.folder.answering import prepare, ready

ExecutorMaker = Callable[[], Executor]


def process_pool(workers: int, warm: Callable[[], object] | None) -> ExecutorMaker:
    """A maker of pools of fresh processes, the same on every system."""

    def make() -> Executor:
        return ProcessPoolExecutor(
            workers,
            mp_context=multiprocessing.get_context("spawn"),
            initializer=prepare,
            initargs=(warm,),
        )

    return make


class Workers:
    """An executor whose finished work is collected by key.

    `wake` is called whenever work has finished, from any thread.
    """

    def __init__(self, make: ExecutorMaker, size: int, wake: Callable[[], None]) -> None:
        self._make = make
        self._size = size
        self._wake = wake
        self._finished: SimpleQueue[tuple[str, Future[Any], Executor]] = SimpleQueue()
        self._executor: Executor | None = None
        self._unfinished: set[Future[Any]] = set()

    def start(self, *handed: object) -> None:
        """Have the workers started and warm, with what they will be handed, before there is work."""
        with contextlib.suppress(BrokenExecutor):
            for _ in range(self._size):
                self._pool().submit(ready, *handed)

    def submit(self, key: str, work: Callable[..., object], *arguments: object) -> Future[Any]:
        """Give work to the pool; its end is reported under `key`."""
        pool = self._pool()
        try:
            future = pool.submit(work, *arguments)
        except (BrokenExecutor, RuntimeError):
            self._replace(pool)
            pool = self._pool()
            future = pool.submit(work, *arguments)
        self._unfinished.add(future)
        future.add_done_callback(lambda done: self._note(key, done, pool))
        return future

    def finished(self) -> Iterator[tuple[str, Future[Any]]]:
        """What has finished since the last call. Where that shows a broken pool, the next work gets a new one."""
        while True:
            try:
                key, future, pool = self._finished.get_nowait()
            except Empty:
                return
            self._unfinished.discard(future)
            if not future.cancelled() and isinstance(future.exception(), BrokenExecutor):
                self._replace(pool)
            yield key, future

    def cancel(self) -> None:
        """Take back the work that no worker has begun; it is reported as cancelled."""
        for future in list(self._unfinished):
            future.cancel()

    def close(self) -> None:
        """End the workers, after what they are doing now."""
        if self._executor is not None:
            self._executor.shutdown(wait=True, cancel_futures=True)
            self._executor = None

    def _pool(self) -> Executor:
        if self._executor is None:
            self._executor = self._make()
        return self._executor

    def _replace(self, pool: Executor) -> None:
        if pool is self._executor:
            pool.shutdown(wait=False, cancel_futures=True)
            self._executor = None

    def _note(self, key: str, future: Future[Any], pool: Executor) -> None:
        self._finished.put((key, future, pool))
        self._wake()
