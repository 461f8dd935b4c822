//! The words of the picture itself (foot line, read-outs, areas) and how numbers are written, by language.
//!
//! Captions are the scenario's own. Languages that are not here get the English words.

/// A noun that is counted.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Noun {
    /// Its form for one.
    pub one: &'static str,
    /// Its form for more.
    pub many: &'static str,
}

/// Which numbers take the form for one.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Singular {
    /// One, whatever its decimals: "1.00 year", but "1.88 years".
    One,
    /// All below two: "1,88 an".
    BelowTwo,
}

/// A language. In its phrases `{}` stands for the number, `{d}`, `{m}` and `{y}` for day, month and year.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Language {
    /// The first part of its BCP 47 tag.
    pub tag: &'static str,
    /// What parts whole from decimals.
    pub decimal: char,
    /// What parts thousands.
    pub thousands: char,
    /// From how many digits on thousands are parted.
    pub parted_from: usize,
    /// Which numbers are singular.
    pub singular: Singular,
    /// The months.
    pub months: [&'static str; 12],
    /// A date.
    pub day: &'static str,
    /// The first of a month, as the number of the day.
    pub first: &'static str,
    /// A month of a year.
    pub month: &'static str,
    /// Seconds, minutes, hours, days, years.
    pub times: [Noun; 5],
    /// Model time, counted in days from the start.
    pub nth_day: &'static str,
    /// Model time, counted in years from the start.
    pub nth_year: &'static str,
    /// A pace.
    pub a_second: &'static str,
    /// The pace of the clock on the wall.
    pub real_time: &'static str,
    /// No pace at all.
    pub still: &'static str,
    /// Astronomical units.
    pub au: &'static str,
    /// Millions of kilometres.
    pub million_km: Noun,
    /// Areas: 10⁶, 10¹² and 10¹⁸ km².
    pub areas: [&'static str; 3],
    /// What unit areas are in.
    pub areas_in: &'static str,
    /// What pull an arrow's length is.
    pub pull_of: &'static str,
    /// A height above ground.
    pub up: &'static str,
    /// The distance at periapsis.
    pub closest: &'static str,
    /// The distance at apoapsis.
    pub farthest: &'static str,
    /// The period of an open orbit.
    pub never_returns: &'static str,
}

/// A space that no line is broken at and that is narrower than the one between words; a text of the picture is one line
/// anyhow, so that of the two such characters the one that the house's sans has can be taken.
const THIN: char = '\u{2009}';

const fn noun(one: &'static str, many: &'static str) -> Noun {
    Noun { one, many }
}

/// English.
pub static ENGLISH: Language = Language {
    tag: "en",
    decimal: '.',
    thousands: ',',
    parted_from: 4,
    singular: Singular::One,
    months: [
        "January",
        "February",
        "March",
        "April",
        "May",
        "June",
        "July",
        "August",
        "September",
        "October",
        "November",
        "December",
    ],
    day: "{d} {m} {y}",
    first: "1",
    month: "{m} {y}",
    times: [
        noun("second", "seconds"),
        noun("minute", "minutes"),
        noun("hour", "hours"),
        noun("day", "days"),
        noun("year", "years"),
    ],
    nth_day: "day {}",
    nth_year: "year {}",
    a_second: "{} a second",
    real_time: "as fast as it is",
    still: "time stands still",
    au: "au",
    million_km: noun("million km", "million km"),
    areas: ["million km²", "million million km²", "million million million km²"],
    areas_in: "areas in {}",
    pull_of: "pull of {}",
    up: "{} up",
    closest: "closest {}",
    farthest: "farthest {}",
    never_returns: "never returns",
};

static SPANISH: Language = Language {
    tag: "es",
    decimal: ',',
    thousands: THIN,
    // Four digits stand together (Ortografía de la lengua española, 2010).
    parted_from: 5,
    singular: Singular::One,
    months: [
        "enero",
        "febrero",
        "marzo",
        "abril",
        "mayo",
        "junio",
        "julio",
        "agosto",
        "septiembre",
        "octubre",
        "noviembre",
        "diciembre",
    ],
    day: "{d} de {m} de {y}",
    first: "1",
    month: "{m} de {y}",
    times: [
        noun("segundo", "segundos"),
        noun("minuto", "minutos"),
        noun("hora", "horas"),
        noun("día", "días"),
        noun("año", "años"),
    ],
    nth_day: "día {}",
    nth_year: "año {}",
    a_second: "{} por segundo",
    real_time: "en tiempo real",
    still: "el tiempo está detenido",
    au: "ua",
    million_km: noun("millón de km", "millones de km"),
    areas: ["millones de km²", "billones de km²", "trillones de km²"],
    areas_in: "áreas en {}",
    pull_of: "tirón de {}",
    up: "{} de altura",
    closest: "más cerca {}",
    farthest: "más lejos {}",
    never_returns: "no vuelve nunca",
};

static GERMAN: Language = Language {
    tag: "de",
    decimal: ',',
    thousands: '.',
    parted_from: 4,
    singular: Singular::One,
    months: [
        "Januar",
        "Februar",
        "März",
        "April",
        "Mai",
        "Juni",
        "Juli",
        "August",
        "September",
        "Oktober",
        "November",
        "Dezember",
    ],
    day: "{d}. {m} {y}",
    first: "1",
    month: "{m} {y}",
    times: [
        noun("Sekunde", "Sekunden"),
        noun("Minute", "Minuten"),
        noun("Stunde", "Stunden"),
        noun("Tag", "Tage"),
        noun("Jahr", "Jahre"),
    ],
    nth_day: "Tag {}",
    nth_year: "Jahr {}",
    a_second: "{} pro Sekunde",
    real_time: "in Echtzeit",
    still: "die Zeit steht still",
    au: "AE",
    million_km: noun("Million km", "Millionen km"),
    areas: ["Millionen km²", "Billionen km²", "Trillionen km²"],
    areas_in: "Flächen in {}",
    pull_of: "Anziehung {}",
    up: "{} Höhe",
    closest: "am nächsten {}",
    farthest: "am fernsten {}",
    never_returns: "kehrt nie zurück",
};

static FRENCH: Language = Language {
    tag: "fr",
    decimal: ',',
    thousands: THIN,
    parted_from: 4,
    singular: Singular::BelowTwo,
    months: [
        "janvier",
        "février",
        "mars",
        "avril",
        "mai",
        "juin",
        "juillet",
        "août",
        "septembre",
        "octobre",
        "novembre",
        "décembre",
    ],
    day: "{d} {m} {y}",
    first: "1er",
    month: "{m} {y}",
    times: [
        noun("seconde", "secondes"),
        noun("minute", "minutes"),
        noun("heure", "heures"),
        noun("jour", "jours"),
        noun("an", "ans"),
    ],
    nth_day: "jour {}",
    nth_year: "année {}",
    a_second: "{} par seconde",
    real_time: "en temps réel",
    still: "le temps est arrêté",
    au: "ua",
    million_km: noun("million de km", "millions de km"),
    areas: ["millions de km²", "milliers de milliards de km²", "milliards de milliards de km²"],
    areas_in: "aires en {}",
    pull_of: "attraction de {}",
    up: "{} d’altitude",
    closest: "au plus près {}",
    farthest: "au plus loin {}",
    never_returns: "ne revient jamais",
};

impl Language {
    /// The language of a BCP 47 tag; English where there is none.
    pub fn of(tag: &str) -> &'static Self {
        let stem = tag.split(['-', '_']).next().unwrap_or("");
        let all = [&ENGLISH, &SPANISH, &GERMAN, &FRENCH];
        all.into_iter().find(|l| l.tag.eq_ignore_ascii_case(stem)).unwrap_or(&ENGLISH)
    }

    /// The form of a noun for a number as it is written in this language.
    pub fn form(&self, noun: Noun, number: &str) -> &'static str {
        let (whole, rest) = number.split_once(self.decimal).unwrap_or((number, ""));
        let singular = match self.singular {
            Singular::One => whole == "1" && rest.bytes().all(|digit| digit == b'0'),
            Singular::BelowTwo => matches!(whole, "0" | "1"),
        };
        if singular { noun.one } else { noun.many }
    }
}

/// A phrase with a number or other words in their place.
pub fn fill(phrase: &str, words: &str) -> String {
    phrase.replace("{}", words)
}

#[cfg(test)]
mod tests {
    use super::super::type_metrics;
    use super::*;

    #[test]
    fn tags_find_their_language_or_english() {
        for (tag, want) in
            [("es-MX", "es"), ("DE", "de"), ("fr_CA", "fr"), ("", "en"), ("cy", "en"), ("est", "en")]
        {
            assert_eq!(Language::of(tag).tag, want, "{tag}");
        }
    }

    #[test]
    fn every_phrase_has_its_place_and_every_letter_its_width() {
        let missing = type_metrics::width("\u{4e00}", 1.0, 400);
        for l in ["en", "es", "de", "fr"].map(Language::of) {
            let places =
                [l.nth_day, l.nth_year, l.a_second, l.areas_in, l.pull_of, l.up, l.closest, l.farthest];
            assert!(places.iter().all(|p| p.matches("{}").count() == 1), "{}", l.tag);
            assert!(["{d}", "{m}", "{y}"].iter().all(|p| l.day.contains(p)), "{}", l.tag);
            assert!(["{m}", "{y}"].iter().all(|p| l.month.contains(p)), "{}", l.tag);
            let nouns = l.times.iter().chain([&l.million_km]).flat_map(|n| [n.one, n.many]);
            let others = [l.real_time, l.still, l.au, l.never_returns];
            let all = places.into_iter().chain(l.months).chain(nouns).chain(l.areas).chain(others);
            let signs = [l.decimal, l.thousands];
            for c in all.flat_map(str::chars).chain(signs).filter(|c| !"{}".contains(*c)) {
                let width = type_metrics::width(&c.to_string(), 1.0, 400);
                assert!((width - missing).abs() > 1e-9, "{}: no width for {c:?}", l.tag);
            }
        }
    }

    #[test]
    fn numbers_choose_their_form() {
        let year = |tag: &str, number| Language::of(tag).form(Language::of(tag).times[4], number);
        assert_eq!([year("en", "1.00"), year("en", "1.88"), year("en", "10")], ["year", "years", "years"]);
        assert_eq!([year("fr", "1,88"), year("fr", "0,24"), year("fr", "2,00")], ["an", "an", "ans"]);
        assert_eq!([year("de", "1"), year("de", "11,9"), year("es", "1,00")], ["Jahr", "Jahre", "año"]);
    }
}
