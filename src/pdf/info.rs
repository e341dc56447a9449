//! The catalogue: metadata, language, colour space, how to print.

use super::{Error, icc, objects};
use chrono::{FixedOffset, NaiveDateTime};
use lopdf::{Document, Object, ObjectId, Stream, StringFormat, dictionary};
use sha2::{Digest, Sha256};

/// What a document says about itself.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct DocumentInfo {
    /// Title, shown by viewers instead of the file name.
    pub title: String,
    /// What it is about.
    pub subject: String,
    /// Language of the text (BCP 47).
    pub language: &'static str,
    /// Program and version.
    pub creator: String,
    /// Date of the document in local time, with its zone where known; `None` leaves it out.
    pub date: Option<(NaiveDateTime, Option<FixedOffset>)>,
}

/// Completes the document: catalogue, information dictionary, XMP, output intent.
pub(super) fn finish(
    document: &mut Document,
    pages: ObjectId,
    structure: ObjectId,
    info: &DocumentInfo,
) -> Result<(), Error> {
    let info = &DocumentInfo {
        title: plain(&info.title),
        subject: plain(&info.subject),
        creator: plain(&info.creator),
        ..*info
    };
    let metadata = document.add_object(
        Stream::new(dictionary! { "Type" => "Metadata", "Subtype" => "XML" }, xmp(info).into_bytes())
            .with_compression(false),
    );
    let profile = document.add_object(objects::compressed(dictionary! { "N" => 3 }, &icc::srgb())?);
    let intent = dictionary! {
        "Type" => "OutputIntent",
        "S" => "GTS_PDFA1",
        "OutputConditionIdentifier" => Object::string_literal("sRGB"),
        "Info" => Object::string_literal("sRGB (IEC 61966-2-1)"),
        "DestOutputProfile" => profile,
    };
    let catalogue = document.add_object(dictionary! {
        "Type" => "Catalog",
        "Pages" => pages,
        "Lang" => objects::text(info.language),
        "Metadata" => metadata,
        "OutputIntents" => vec![intent.into()],
        "MarkInfo" => dictionary! { "Marked" => true },
        "StructTreeRoot" => structure,
        // Advisory (ISO 32000-2, table 147); the check bars on the sheet show whether it was heeded.
        "ViewerPreferences" => dictionary! {
            "PrintScaling" => "None",
            "Enforce" => vec!["PrintScaling".into()],
            "DisplayDocTitle" => true,
        },
    });
    let mut dictionary = dictionary! {
        "Title" => objects::text(&info.title),
        "Subject" => objects::text(&info.subject),
        "Creator" => objects::text(&info.creator),
        "Producer" => objects::text(&info.creator),
    };
    if let Some((local, zone)) = info.date {
        let date = format!("D:{}{}", local.format("%Y%m%d%H%M%S"), pdf_zone(zone));
        dictionary.set("CreationDate", objects::text(&date));
        dictionary.set("ModDate", objects::text(&date));
    }
    let information = document.add_object(dictionary);
    document.trailer.set("Root", catalogue);
    document.trailer.set("Info", information);
    Ok(())
}

/// The bytes of a complete document, with an identifier (ISO 32000-1, 14.4) made from its content alone.
pub(super) fn save(document: &mut Document) -> Result<Vec<u8>, Error> {
    let failed = |error: std::io::Error| Error::Document(error.to_string());
    let mut bytes = Vec::with_capacity(96 * 1024);
    document.save_to(&mut bytes).map_err(failed)?;
    let digest = Sha256::digest(&bytes);
    let identifier = Object::String(digest[..16].to_vec(), StringFormat::Hexadecimal);
    document.trailer.set("ID", vec![identifier.clone(), identifier]);
    bytes.clear();
    document.save_modern(&mut bytes).map_err(failed)?;
    Ok(bytes)
}

/// Without what neither XML 1.0 (2.2) nor a line of text may hold.
fn plain(text: &str) -> String {
    let allowed = |character: char| !character.is_control() && !matches!(character, '\u{FFFE}' | '\u{FFFF}');
    text.chars().map(|character| if allowed(character) { character } else { ' ' }).collect()
}

fn pdf_zone(zone: Option<FixedOffset>) -> String {
    zone.map_or(String::new(), |zone| {
        let minutes = zone.local_minus_utc() / 60;
        let sign = if minutes < 0 { '-' } else { '+' };
        format!("{sign}{:02}'{:02}'", minutes.abs() / 60, minutes.abs() % 60)
    })
}

fn escaped(text: &str) -> String {
    text.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;")
}

fn xmp(info: &DocumentInfo) -> String {
    let date = info.date.map_or(String::new(), |(local, zone)| {
        let date =
            format!("{}{}", local.format("%Y-%m-%dT%H:%M:%S"), zone.map_or(String::new(), |z| z.to_string()));
        format!("   <xmp:CreateDate>{date}</xmp:CreateDate>\n   <xmp:ModifyDate>{date}</xmp:ModifyDate>\n")
    });
    let (title, subject, creator) = (escaped(&info.title), escaped(&info.subject), escaped(&info.creator));
    let language = info.language;
    format!(
        "<?xpacket begin=\"\u{FEFF}\" id=\"W5M0MpCehiHzreSzNTczkc9d\"?>\n\
<x:xmpmeta xmlns:x=\"adobe:ns:meta/\">\n \
<rdf:RDF xmlns:rdf=\"http://www.w3.org/1999/02/22-rdf-syntax-ns#\">\n  \
<rdf:Description rdf:about=\"\" xmlns:dc=\"http://purl.org/dc/elements/1.1/\" \
xmlns:xmp=\"http://ns.adobe.com/xap/1.0/\" xmlns:pdf=\"http://ns.adobe.com/pdf/1.3/\" \
xmlns:pdfaid=\"http://www.aiim.org/pdfa/ns/id/\">\n   \
<pdfaid:part>3</pdfaid:part>\n   <pdfaid:conformance>B</pdfaid:conformance>\n   \
<dc:format>application/pdf</dc:format>\n   \
<dc:language><rdf:Bag><rdf:li>{language}</rdf:li></rdf:Bag></dc:language>\n   \
<dc:title><rdf:Alt><rdf:li xml:lang=\"x-default\">{title}</rdf:li></rdf:Alt></dc:title>\n   \
<dc:description><rdf:Alt><rdf:li xml:lang=\"x-default\">{subject}</rdf:li></rdf:Alt></dc:description>\n   \
<xmp:CreatorTool>{creator}</xmp:CreatorTool>\n{date}   \
<pdf:Producer>{creator}</pdf:Producer>\n  \
</rdf:Description>\n </rdf:RDF>\n</x:xmpmeta>\n<?xpacket end=\"w\"?>"
    )
}
