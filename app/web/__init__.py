"""The server: JSON API, shell and service worker for the client, sign-in, headers.

``factory`` makes the application; ``security`` guards every request and answers
every error; ``sessions`` knows who asks; ``programme`` starts one and adds
people; ``sync`` takes entries and gives records; ``certificates`` issues;
``shell`` serves the client. Each module is one blueprint of one subject.
"""
