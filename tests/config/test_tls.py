"""The site as it stands in production: nginx with TLS before it, as written in config/deploy."""

from __future__ import annotations

import http.client
import re
import shutil
import ssl
import subprocess
import sys
from urllib.parse import urlencode

import pytest

from structures.intake.archive import FILE_MOST_BYTES
from tests.config.site_copy import clean_environment, command, wait_until, whole_copy
from tests.config.test_site import free_port

NGINX = shutil.which("nginx", path="/usr/sbin:/usr/local/sbin:/usr/bin")
pytestmark = [
    pytest.mark.fault,
    pytest.mark.skipif(NGINX is None, reason="nginx is not installed"),
]
HOST = "dams.example.org"
PASSWORD = "puddle-clay-and-film"
FRAME = """
user root; pid {place}/nginx.pid; error_log {place}/error.log; daemon off;
events {{}}
http {{
  access_log off; include {place}/site.conf;
  client_body_temp_path {place}/body; proxy_temp_path {place}/proxy;
  fastcgi_temp_path {place}/a; uwsgi_temp_path {place}/b; scgi_temp_path {place}/c;
}}
"""


class Visitor:
    """Somebody who reaches the site by its name over https and keeps its cookies."""

    def __init__(self, port, certificate):
        self.port, self.cookies, self.set = port, {}, {}
        # The certificate is its own authority; the name is not one that leads to this machine.
        self.trust = ssl.create_default_context(cafile=certificate)
        self.trust.check_hostname = False

    def ask(self, method, path, body=b"", kind="application/x-www-form-urlencoded", **more):
        line = http.client.HTTPSConnection("127.0.0.1", self.port, context=self.trust, timeout=60)
        cookies = "; ".join(f"{name}={value}" for name, value in self.cookies.items())
        headers = {"Host": HOST, "Referer": f"https://{HOST}{path}", "Cookie": cookies, **more}
        if body:
            headers["Content-Type"] = kind
        line.request(method, path, body or None, headers)
        answer = line.getresponse()
        text = answer.read().decode(errors="replace")
        for said in answer.headers.get_all("Set-Cookie") or ():
            name, _, value = said.partition(";")[0].partition("=")
            self.cookies[name], self.set[name] = value, said
        line.close()
        return answer, text

    def send(self, path, **said):
        _, page = self.ask("GET", path)
        token = re.search(r'name="csrfmiddlewaretoken" value="([^"]+)"', page)[1]
        return self.ask("POST", path, urlencode({**said, "csrfmiddlewaretoken": token}).encode())


@pytest.fixture(scope="module")
def site(tmp_path_factory):
    """Waitress behind nginx, each on a port of its own, and the first administrator's word."""
    folder = whole_copy(tmp_path_factory.mktemp("tls") / "copy")
    place = folder.parent / "nginx"
    place.mkdir()
    environ = {"ALLOWED_HOSTS": HOST, "SECRET_KEY": "k" * 60}
    word = re.search(
        r"word ([a-z0-9-]{19})", command(folder, "set_up", "--empty", **environ).stdout
    )[1]
    web, tls, plain = free_port(), free_port(), free_port()
    certificate, key = place / "fullchain.pem", place / "privkey.pem"
    subprocess.run(
        [
            *("openssl", "req", "-x509", "-newkey", "rsa:2048", "-nodes", "-days", "2"),
            *("-subj", f"/CN={HOST}", "-keyout", str(key), "-out", str(certificate)),
        ],
        check=True,
        capture_output=True,
    )
    written = (folder / "config" / "deploy" / "nginx.conf").read_text()
    for old, new in (
        ("/etc/letsencrypt/live/HOST", str(place)),
        ("HOST", HOST),
        ("listen [::]:80;", ""),
        ("listen [::]:443 ssl;", ""),
        ("listen 80;", f"listen 127.0.0.1:{plain};"),
        ("listen 443 ssl;", f"listen 127.0.0.1:{tls} ssl;"),
        ("127.0.0.1:8000", f"127.0.0.1:{web}"),
    ):
        assert old in written
        written = written.replace(old, new)
    (place / "site.conf").write_text(written)
    (place / "nginx.conf").write_text(FRAME.format(place=place))
    service = (folder / "config" / "deploy" / "web.service").read_text().replace("\\\n", " ")
    options = re.search(r"-m waitress (.*) config\.wsgi", service)[1].replace("8000", str(web))
    options = [one.replace("\\ ", " ") for one in re.split(r"(?<!\\)\s+", options) if one]
    running = [
        subprocess.Popen(
            [sys.executable, "-m", "waitress", *options, "config.wsgi:application"],
            cwd=folder,
            env=clean_environment(**environ),
        ),
        subprocess.Popen([NGINX, "-p", str(place), "-c", str(place / "nginx.conf")]),
    ]
    try:
        visitor = Visitor(tls, certificate)

        def answers():
            try:
                return visitor.ask("GET", "/healthz")[0].status == 200
            except OSError:
                return False

        wait_until(answers, 60)
        yield tls, plain, certificate, word, running
    finally:
        for one in running:
            one.terminate()
            one.wait(10)


def test_people_sign_in_by_https_with_secure_cookies_only(site):
    tls, _, certificate, word, _ = site
    visitor = Visitor(tls, certificate)
    came, _ = visitor.send("/welcome/", login="admin", word=word, password=PASSWORD, again=PASSWORD)
    assert came.status == 302
    other = Visitor(tls, certificate)
    came, _ = other.send("/sign-in/", username="admin", password=PASSWORD)
    assert came.status == 302
    assert came.headers["Location"].startswith("/")
    for name in ("sessionid", "csrftoken"):
        assert "Secure" in other.set[name]
    assert "HttpOnly" in other.set["sessionid"]
    page, text = other.ask("GET", "/password/")
    assert page.status == 200
    assert "admin" in text
    assert page.headers["Strict-Transport-Security"] == "max-age=31536000; includeSubDomains"
    assert "default-src 'self'" in page.headers["Content-Security-Policy"]
    assert page.headers["X-Frame-Options"] == "DENY"
    worker, _ = other.ask("GET", "/today/worker.js")
    assert worker.status == 200
    assert "javascript" in worker.headers["Content-Type"]


def test_without_tls_there_is_only_the_way_to_it(site):
    _, plain, _, _, _ = site
    line = http.client.HTTPConnection("127.0.0.1", plain, timeout=10)
    line.request("GET", "/sign-in/", headers={"Host": HOST})
    answer = line.getresponse()
    assert (answer.status, answer.headers["Location"]) == (301, f"https://{HOST}/sign-in/")


def test_a_name_that_is_not_ours_is_not_answered(site):
    tls, _, certificate, _, _ = site
    answer, _ = Visitor(tls, certificate).ask("GET", "/", Host="elsewhere.example")
    assert answer.status == 400


def test_a_file_that_is_too_large_is_told_so_in_a_sentence(site):
    tls, _, certificate, _, _ = site
    visitor = Visitor(tls, certificate)
    _, page = visitor.ask("GET", "/")
    token = re.search(r'name="csrfmiddlewaretoken" value="([^"]+)"', page)[1]

    def form(size):
        head = "".join(
            f'--x\r\nContent-Disposition: form-data; name="{name}"{more}\r\n\r\n{value}'
            for name, more, value in (
                ("csrfmiddlewaretoken", "", f"{token}\r\n"),
                ("pack", '; filename="a.json"', ""),
            )
        )
        return head.encode() + b" " * size + b"\r\n--x--\r\n"

    kind = "multipart/form-data; boundary=x"
    inside, text = visitor.ask("POST", "/", form(FILE_MOST_BYTES + 1_000_000), kind)
    assert inside.status == 422
    assert "The file has 21 MB, limit 20. Nothing was read. Split it." in text
    beyond, text = visitor.ask("POST", "/", form(49 * 1024 * 1024), kind)
    assert beyond.status == 413
    assert "too large: 20 MB at most" in text
    assert beyond.headers["Strict-Transport-Security"]


def test_while_the_program_is_away_a_sentence_says_so(site):
    tls, _, certificate, _, (web, _) = site
    web.terminate()
    web.wait(10)
    answer, text = Visitor(tls, certificate).ask("GET", "/sign-in/")
    assert (answer.status, answer.headers["Retry-After"]) == (503, "30")
    assert "being started" in text
