using System.ComponentModel.DataAnnotations;

namespace Lampwarden.Host.Configuration;

/// <summary>One route: a way to reach a person. The log route is always there.</summary>
public sealed class AlertRouteOptions
{
    /// <summary>webhook, mail, mqtt or command, with an object of that name beside it; log (always there) needs none.</summary>
    [AllowedValues("log", "webhook", "mail", "mqtt", "command")]
    public string Kind { get; set; } = "log";

    /// <summary>Unique name in messages; null for the kind.</summary>
    [RegularExpression("^[A-Za-z0-9][A-Za-z0-9 ._-]{0,62}$")]
    public string? Name { get; set; }

    /// <summary>warning or critical: alerts below it are not told here.</summary>
    [AllowedValues("warning", "critical")]
    public string MinimumSeverity { get; set; } = "warning";

    /// <summary>0: told at once. n: told only from the n-th repeat of a critical alert that nobody acknowledged; 0 to 20.</summary>
    [Range(0, 20)]
    public int AfterRepeats { get; set; }

    /// <summary>Seconds one attempt may take; 0.1 to 120.</summary>
    [Range(0.1, 120.0)]
    public double AttemptSeconds { get; set; } = 10;

    /// <summary>Minutes until a message that cannot be told is given up; 0.05 to 1440.</summary>
    [Range(0.05, 1440.0)]
    public double GiveUpMinutes { get; set; } = 30;

    /// <summary>Seconds of failing after which the route counts as down and the others are told so; 1 to 3600.</summary>
    [Range(1.0, 3600.0)]
    public double DownAfterSeconds { get; set; } = 60;

    /// <summary>Messages a minute at most; beyond it several alerts become one message; 1 to 600.</summary>
    [Range(1, 600)]
    public int AtMostPerMinute { get; set; } = 20;

    /// <summary>For kind webhook.</summary>
    public WebhookOptions? Webhook { get; set; }

    /// <summary>For kind mail.</summary>
    public MailOptions? Mail { get; set; }

    /// <summary>For kind mqtt.</summary>
    public MqttOptions? Mqtt { get; set; }

    /// <summary>For kind command.</summary>
    public RunOptions? Command { get; set; }
}

/// <summary>A POST of signed JSON.</summary>
public sealed class WebhookOptions
{
    /// <summary>Where to; http or https. Redirects are not followed.</summary>
    [Required, Url]
    public string Url { get; set; } = "";

    /// <summary>File with the signing secret; null to take <see cref="SecretVariable"/>.</summary>
    public string? SecretFile { get; set; }

    /// <summary>Environment variable with the signing secret; null with no file either: unsigned.</summary>
    public string? SecretVariable { get; set; }
}

/// <summary>Mail over SMTP.</summary>
public sealed class MailOptions
{
    /// <summary>Name or address of the mail server.</summary>
    [Required]
    public string Host { get; set; } = "";

    /// <summary>1 to 65535; 587 with startTls and 465 with tls are usual.</summary>
    [Range(1, 65535)]
    public int Port { get; set; } = 587;

    /// <summary>startTls, tls or none. A password is never sent over none, except to loopback.</summary>
    [AllowedValues("startTls", "tls", "none")]
    public string Tls { get; set; } = "startTls";

    /// <summary>SHA-256 of the server's certificate in hex, for a server with one of its own making; null to check its chain as usual.</summary>
    [RegularExpression("^[0-9A-Fa-f]{64}$")]
    public string? CertificateSha256 { get; set; }

    /// <summary>Sender's address.</summary>
    [Required]
    public string From { get; set; } = "";

    /// <summary>Receivers' addresses; at least one.</summary>
    public IList<string> To { get; set; } = [];

    /// <summary>User to log in as; null for none.</summary>
    public string? User { get; set; }

    /// <summary>File with the password.</summary>
    public string? PasswordFile { get; set; }

    /// <summary>Environment variable with the password, where no file is named.</summary>
    public string? PasswordVariable { get; set; }
}

/// <summary>An MQTT broker. It keeps the state of every bench, and tells by itself when this program is gone.</summary>
public sealed class MqttOptions
{
    /// <summary>Name or address of the broker.</summary>
    [Required]
    public string Host { get; set; } = "";

    /// <summary>1 to 65535; 1883 is usual, 8883 with tls.</summary>
    [Range(1, 65535)]
    public int Port { get; set; } = 1883;

    /// <summary>Whether the connection is encrypted.</summary>
    public bool Tls { get; set; }

    /// <summary>SHA-256 of the broker's certificate in hex; null to check its chain as usual.</summary>
    [RegularExpression("^[0-9A-Fa-f]{64}$")]
    public string? CertificateSha256 { get; set; }

    /// <summary>First part of every topic, without wildcards; null for lampwarden/ and the instance.</summary>
    [RegularExpression("^[^#+/ ]+(/[^#+/ ]+)*$")]
    public string? Topic { get; set; }

    /// <summary>Seconds between signs of life; the broker tells of our end after one and a half of them; 2 to 600.</summary>
    [Range(2, 600)]
    public int KeepAliveSeconds { get; set; } = 15;

    /// <summary>User to log in as; null for none.</summary>
    public string? User { get; set; }

    /// <summary>File with the password.</summary>
    public string? PasswordFile { get; set; }

    /// <summary>Environment variable with the password, where no file is named.</summary>
    public string? PasswordVariable { get; set; }
}

/// <summary>A program to run for each message: JSON on its standard input, exit 0 for told.</summary>
public sealed class RunOptions
{
    /// <summary>Path of the program, run without a shell.</summary>
    [Required]
    public string Program { get; set; } = "";

    /// <summary>Its arguments.</summary>
    public IList<string> Arguments { get; set; } = [];
}
